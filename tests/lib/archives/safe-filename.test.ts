import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { safeFilename } from "@/lib/archives/safe-filename";

describe("a file name", () => {
  it.each([
    ["night.csv", "night.csv"],
    ["/etc/passwd", "passwd"],
    ["..\\..\\boot.ini", "boot.ini"],
    ["a\u0000b\n.csv", "ab.csv"],
    ["gnp\u202Ecsv.exe", "gnpcsv.exe"],
    ["", "archive"],
    [null, "archive"],
    ["..", "archive"],
  ])("%j is kept as %j", (given, kept) => {
    expect(safeFilename(given)).toBe(kept);
  });

  it("never has a folder, a control character or more than 300 characters", () => {
    fc.assert(
      fc.property(fc.string({ unit: "binary", maxLength: 700 }), (given) => {
        const kept = safeFilename(given);
        expect(kept).not.toMatch(/[/\\\p{Cc}]/u);
        expect(kept.length).toBeGreaterThan(0);
        expect(kept.length).toBeLessThanOrEqual(300);
      }),
    );
  });
});
