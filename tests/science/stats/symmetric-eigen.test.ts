import { describe, expect, it } from "vitest";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { symmetricEigen } from "@/lib/science/stats/symmetric-eigen";

function randomSymmetric(size: number, seed: number): Float64Array {
  const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, 0);
  const matrix = new Float64Array(size * size);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j <= i; j++) matrix[i * size + j] = matrix[j * size + i] = stream.nextUniform() - 0.5;
  }
  return matrix;
}

function rebuild({ values, vectors }: { values: Float64Array; vectors: Float64Array }, size: number): Float64Array {
  return Float64Array.from({ length: size * size }, (_, at) => {
    let sum = 0;
    for (let m = 0; m < size; m++) sum += vectors[Math.floor(at / size) * size + m] * values[m] * vectors[(at % size) * size + m];
    return sum;
  });
}

describe("the eigen-decomposition of a symmetric matrix", () => {
  // Textbook closed form: −2 cos(πm/(N+1)) for the chain with 1 beside the diagonal.
  it("finds the closed-form spectrum of the open hopping chain", () => {
    const size = 30;
    const chain = new Float64Array(size * size);
    for (let i = 1; i < size; i++) chain[i * size + i - 1] = chain[(i - 1) * size + i] = 1;
    const { values } = symmetricEigen(chain, size);
    values.forEach((value, m) => expect(value).toBeCloseTo(-2 * Math.cos((Math.PI * (m + 1)) / (size + 1)), 13));
  });

  it.each([1, 2, 3, 17, 60])("rebuilds a random %d × %d matrix, with orthonormal vectors", (size) => {
    const matrix = randomSymmetric(size, size);
    const found = symmetricEigen(matrix, size);
    rebuild(found, size).forEach((value, at) => expect(value).toBeCloseTo(matrix[at], 12));
    rebuild({ values: new Float64Array(size).fill(1), vectors: found.vectors }, size).forEach((value, at) =>
      expect(value).toBeCloseTo(at % (size + 1) === 0 ? 1 : 0, 12),
    );
    expect([...found.values]).toEqual([...found.values].sort((a, b) => a - b));
  });

  it("does not mind equal eigenvalues, and leaves its input alone", () => {
    const matrix = Float64Array.of(2, 0, 0, 0, 2, 0, 0, 0, 2);
    expect([...symmetricEigen(matrix, 3).values]).toEqual([2, 2, 2]);
    expect([...matrix]).toEqual([2, 0, 0, 0, 2, 0, 0, 0, 2]);
  });

  it("throws for entries that are not numbers", () => {
    expect(() => symmetricEigen(Float64Array.of(1, NaN, NaN, 1), 2)).toThrow(RangeError);
  });
});
