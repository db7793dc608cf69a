import { describe, expect, it } from "vitest";
import { resampledMeans } from "@/lib/science/threshold-free/resampled-means";
import { plainMultiplicities } from "@/tests/science/correlators/plain-bootstrap";

describe("means over resampled shots", () => {
  it("are those of the plain multiplicities, for any number of shots, rows and replicates", () => {
    for (const [shots, rows, replicates] of [[1, 1, 1], [63, 3, 33], [64, 4, 5], [131, 5, 70]]) {
      const reading = (row: number, s: number) => Math.sin(1 + s * (row + 2));
      const means = resampledMeans({ shots, replicates, seed: 9, blockLength: 1, timeIndex: 4 }, rows, (row, readings) => {
        readings.forEach((_, s) => (readings[s] = reading(row, s)));
      });
      expect(means).toHaveLength(rows * replicates);
      for (const b of [0, Math.floor(replicates / 2), replicates - 1]) {
        const times = plainMultiplicities(9, 4, b, shots);
        const plain = times.reduce((sum, n, s) => sum + n * reading(rows - 1, s), 0) / shots;
        expect(means[(rows - 1) * replicates + b]).toBeCloseTo(plain, 13);
      }
    }
  });

  it("of a reading that never changes are that reading, also where rows do not fit into memory at once", () => {
    for (const blockLength of [1, 50]) {
      const means = resampledMeans({ shots: 60000, replicates: 3, seed: 9, blockLength, timeIndex: 0 }, 35, (row, readings) => readings.fill(row));
      expect(Array.from(means)).toEqual(Array.from({ length: 105 }, (_, at) => Math.floor(at / 3)));
    }
  });
});
