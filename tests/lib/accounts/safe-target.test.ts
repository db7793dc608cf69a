import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { safeTarget } from "@/lib/accounts/safe-target";

describe("where signing in leads to", () => {
  it("is a page of this site, with its query and fragment", () => {
    expect(safeTarget("/runs/abc/front?level=0.2#table")).toBe("/runs/abc/front?level=0.2#table");
  });

  it.each([
    "", null, undefined, "runs", "https://elsewhere.example/", "//elsewhere.example", "/\\elsewhere.example", "/\t/elsewhere.example",
    "/.//elsewhere.example", "/a/..//elsewhere.example", "\\\\elsewhere.example", "javascript:alert(1)", " /runs", "/\n/elsewhere.example",
  ])("is never another site: %j", (wish) => {
    expect(safeTarget(wish)).toBe("/runs");
  });

  it("stays on this site whatever is wished for", () => {
    const piece = fc.constantFrom("/", "\\", ".", "..", ":", "@", "?", "#", "%2f", "\t", "\n", "elsewhere.example", "http:", "a");
    fc.assert(
      fc.property(fc.array(piece, { maxLength: 8 }), (pieces) => {
        const target = safeTarget(pieces.join(""));
        expect(new URL(target, "https://strandline.example/sign-in").origin).toBe("https://strandline.example");
        expect(safeTarget(target)).toBe(target);
      }),
      { numRuns: 2000 },
    );
  });
});
