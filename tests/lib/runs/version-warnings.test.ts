import { describe, expect, it } from "vitest";
import { versionWarnings } from "@/lib/runs/version-warnings";

const dark = { firstBin: 0, frequencies: Uint32Array.of(40) };
const lively = { firstBin: 0, frequencies: Uint32Array.of(20, 10, 10) };
const codes = (...given: Parameters<typeof versionWarnings>) => versionWarnings(...given).map(({ code }) => code);

describe("what was read", () => {
  it("is not warned about when nothing is odd", () => {
    expect(codes([lively, lively], ["a", "b"], [10, 10, 10])).toEqual([]);
  });

  it("names the sites that are always dark", () => {
    const [warning] = versionWarnings([dark, lively], ["a", "b"], [10, 10, 10]);
    expect(warning).toMatchObject({ code: "dark-site" });
    expect(warning.message).toContain("site a");
  });

  it("asks for the detector when everything is zero", () => {
    expect(codes([dark, dark], ["a", "b"], [10, 10, 10])).toEqual(["all-zero"]);
  });

  it("counts times with a single shot, and says when there are too few times", () => {
    expect(codes([lively, lively], ["a", "b"], [1, 10])).toEqual(["one-shot", "few-times"]);
  });
});
