import { describe, expect, it } from "vitest";
import { versionWarnings } from "@/lib/runs/version-warnings";
import type { SiteHistogram } from "@/lib/science/detection/histogram";

const dark = { firstBin: 0, frequencies: Uint32Array.of(40) };
const lively = { firstBin: 0, frequencies: Uint32Array.of(20, 10, 10) };
/** 60 dark shots at zero and 40 bright ones that end at `bright`. */
function site(bright: number): SiteHistogram {
  const frequencies = new Uint32Array(bright + 1);
  frequencies[0] = 60;
  frequencies[bright - 1] += 20;
  frequencies[bright] += 20;
  return { firstBin: 0, frequencies };
}
const names = (sites: number) => Array.from({ length: sites }, (_, i) => `s${i}`);
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

  it.each([
    [3, "dimmer"],
    [30, "brighter"],
  ])("names a site that ends at %i counts where the others end at 10: %s", (bright) => {
    const warnings = versionWarnings([site(10), site(10), site(bright), site(10), site(10)], names(5), [10, 10, 10]);
    expect(warnings.map(({ code }) => code)).toEqual(["odd-brightness"]);
    expect(warnings[0].message).toContain(`Site s2 reaches ${bright} counts`);
  });

  it("does not take for odd how often a site is bright: that is physics", () => {
    const rarely = { firstBin: 0, frequencies: Uint32Array.from([950, 0, 0, 0, 0, 0, 0, 0, 10, 20, 20]) };
    expect(codes([site(10), site(10), rarely, site(10)], names(4), [10, 10, 10])).toEqual([]);
  });

  it("does not compare fractional counts, which have no fixed zero", () => {
    expect(codes([site(10), site(10), { ...site(91), firstBin: -3 }, site(10)], names(4), [10, 10, 10])).toEqual([]);
  });

  it("counts times with a single shot, and says when there are too few times", () => {
    expect(codes([lively, lively], ["a", "b"], [1, 10])).toEqual(["one-shot", "few-times"]);
  });
});
