import fc from "fast-check";
import { describe, expect, it } from "vitest";
import {
  countHistograms,
  mergeHistograms,
  shotsInHistogram,
  type SiteHistogram,
} from "@/lib/science/detection/histogram";

const plain = (histogram: SiteHistogram) => ({ ...histogram, frequencies: [...histogram.frequencies] });

describe("histograms of whole counts", () => {
  it("give each site the frequency of every count from zero on", () => {
    const counts = Uint16Array.of(0, 5, 2, 5, 2, 7);
    expect(countHistograms(counts, 2).map(plain)).toEqual([
      { firstBin: 0, frequencies: [1, 0, 2] },
      { firstBin: 0, frequencies: [0, 0, 0, 0, 0, 2, 0, 1] },
    ]);
  });

  it("leave out shots that are set aside", () => {
    const histograms = countHistograms(Uint16Array.of(1, 9, 0, 9, 1, 9), 2, Uint8Array.of(0, 1, 0));
    expect(histograms.map(shotsInHistogram)).toEqual([2, 2]);
    expect([...histograms[0].frequencies]).toEqual([0, 2]);
  });

  it("hold the largest count a file can have", () => {
    expect(countHistograms(Uint16Array.of(65_535), 1)[0].frequencies[65_535]).toBe(1);
  });

  it("are the same from any split of the shots", () => {
    const shots = fc.array(fc.tuple(fc.nat(30), fc.nat(300)), { maxLength: 60 });
    fc.assert(
      fc.property(shots, fc.nat(60), (rows, cut) => {
        const whole = countHistograms(Uint16Array.from(rows.flat()), 2);
        const first = countHistograms(Uint16Array.from(rows.slice(0, cut).flat()), 2);
        const second = countHistograms(Uint16Array.from(rows.slice(cut).flat()), 2);
        for (const site of [0, 1]) {
          expect(mergeHistograms(first[site], second[site])).toEqual(whole[site]);
          expect(mergeHistograms(second[site], first[site])).toEqual(whole[site]);
        }
      }),
    );
  });
});

describe("histograms of fractional counts", () => {
  it("have bins one unit wide from the least count, rounded down", () => {
    const [histogram] = countHistograms(Float32Array.of(-1.5, 0.25, 0.75, 1, Number.NaN), 1);
    expect(plain(histogram)).toEqual({ firstBin: -2, frequencies: [1, 0, 2, 1] });
  });

  it("collect wild values in the end bins", () => {
    const [histogram] = countHistograms(Float32Array.of(-1e30, 1e30), 1);
    expect(histogram.firstBin).toBe(-65_536);
    expect(histogram.frequencies.length).toBe(131_073);
    expect(shotsInHistogram(histogram)).toBe(2);
  });

  it("merge over different first bins, leaving both parts as they were", () => {
    const [left] = countHistograms(Float32Array.of(-3.5, 0.5), 1);
    const [right] = countHistograms(Float32Array.of(2.5, 0.25), 1);
    const before = plain(left);
    expect(plain(mergeHistograms(left, right))).toEqual({ firstBin: -4, frequencies: [1, 0, 0, 0, 2, 0, 1] });
    expect(plain(left)).toEqual(before);
  });

  it("have no bins without counts", () => {
    expect(plain(countHistograms(Float32Array.of(Number.NaN), 1)[0])).toEqual({ firstBin: 0, frequencies: [] });
  });
});
