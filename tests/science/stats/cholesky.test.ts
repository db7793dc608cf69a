import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { choleskyFactor, invertPositiveDefinite, solveByCholesky } from "@/lib/science/stats/cholesky";

describe("Cholesky", () => {
  it("factors a matrix worked out by hand", () => {
    const factor = choleskyFactor(Float64Array.of(4, 2, 2, 5), 2);
    expect(factor).toEqual(Float64Array.of(2, 0, 1, 2));
    expect(solveByCholesky(Float64Array.of(2, 0, 1, 2), 2, [8, 12])).toEqual(Float64Array.of(1, 2));
  });

  it("answers null where the matrix is not positive definite", () => {
    expect(choleskyFactor(Float64Array.of(1, 2, 2, 1), 2)).toBeNull();
    expect(invertPositiveDefinite(Float64Array.of(0), 1)).toBeNull();
  });

  it("inverts A Aᵀ + I", () => {
    const entries = fc.array(fc.double({ min: -3, max: 3, noNaN: true }), { minLength: 9, maxLength: 9 });
    fc.assert(
      fc.property(entries, (a) => {
        const at = (row: number, column: number) =>
          [0, 1, 2].reduce((sum, m) => sum + a[row * 3 + m] * a[column * 3 + m], 0);
        const matrix = Float64Array.from({ length: 9 }, (_, e) => at(Math.floor(e / 3), e % 3) + (e % 4 === 0 ? 1 : 0));
        const inverse = invertPositiveDefinite(matrix, 3) ?? new Float64Array(9);
        for (let row = 0; row < 3; row++) {
          for (let column = 0; column < 3; column++) {
            const product = [0, 1, 2].reduce((sum, m) => sum + matrix[row * 3 + m] * inverse[m * 3 + column], 0);
            expect(product).toBeCloseTo(row === column ? 1 : 0, 9);
          }
        }
      }),
    );
  });
});
