import { describe, expect, it } from "vitest";
import { pairAcceleration, sumAcceleration } from "@/lib/science/correlators/jackknife-acceleration";
import { jackknifeAcceleration, standardDeviation } from "@/lib/science/stats/intervals";
import { plainCorrelator, plainMean } from "@/tests/science/correlators/plain-bootstrap";
import { correlatedSpins, packShots } from "@/tests/science/correlators/spin-samples";

function shotsOf(outcomes: number[]): number[][] {
  const kinds = [
    [1, 1],
    [1, -1],
    [-1, 1],
    [-1, -1],
  ];
  return outcomes.flatMap((shots, n) => Array.from({ length: shots }, () => kinds[n]));
}

function leaveOneOut(spins: number[][], estimate: (times: number[]) => number): number[] {
  const times = spins.map(() => 1);
  return spins.map((_, s) => {
    times[s] = 0;
    const value = estimate(times);
    times[s] = 1;
    return value;
  });
}

describe("the acceleration of BCa in closed form", () => {
  // Jackknife errors of these outcomes: .0283267507, .0281673894, .0316702701 by leaving out shot after shot.
  it.each([
    { outcomes: [400, 100, 200, 300], error: 0.0283267507 },
    { outcomes: [520, 110, 130, 240], error: 0.0281673894 },
    { outcomes: [250, 250, 250, 250], error: 0.0316702701 },
  ])("equals leaving out each shot of $outcomes", ({ outcomes, error }) => {
    const spins = shotsOf(outcomes);
    const values = leaveOneOut(spins, (times) => plainCorrelator(spins, times, 0, 1));
    expect(standardDeviation(values) * (999 / Math.sqrt(1000))).toBeCloseTo(error, 10);
    const [both, onlyI, onlyJ, neither] = outcomes;
    expect(pairAcceleration([both, onlyI, onlyJ, neither])).toBeCloseTo(jackknifeAcceleration(values), 8);
  });

  it("is 0 when a site never flips", () => {
    expect(pairAcceleration([0, 0, 5, 995])).toBe(0);
  });

  it("equals leaving out each shot for a weighted sum of pairs", () => {
    const spins = correlatedSpins(60, 4, 8);
    const mean = Float64Array.from({ length: 4 }, (_, i) =>
      plainMean(
        spins,
        spins.map(() => 1),
        i,
      ),
    );
    const values = leaveOneOut(
      spins,
      (times) => 0.7 * plainCorrelator(spins, times, 0, 1) + 0.3 * plainCorrelator(spins, times, 1, 3),
    );
    const found = sumAcceleration(packShots(spins), mean, [0, 1, 1, 3], [0.7, 0.3]);
    expect(found).toBeCloseTo(jackknifeAcceleration(values), 10);
  });
});
