/**
 * Returns the lower Cholesky factor `[row][column]` of a symmetric `size` × `size` matrix, or null when it is not
 * positive definite.
 */
export function choleskyFactor(matrix: Float64Array, size: number): Float64Array | null {
  const factor = new Float64Array(size * size);
  for (let row = 0; row < size; row++) {
    for (let column = 0; column <= row; column++) {
      let sum = matrix[row * size + column];
      for (let m = 0; m < column; m++) sum -= factor[row * size + m] * factor[column * size + m];
      if (row !== column) factor[row * size + column] = sum / factor[column * size + column];
      else if (sum > 0) factor[row * size + row] = Math.sqrt(sum);
      else return null;
    }
  }
  return factor;
}

/** Returns the solution of `L Lᵀ x = right` for a lower Cholesky factor L. */
export function solveByCholesky(factor: Float64Array, size: number, right: ArrayLike<number>): Float64Array {
  const x = Float64Array.from(right);
  for (let row = 0; row < size; row++) {
    for (let m = 0; m < row; m++) x[row] -= factor[row * size + m] * x[m];
    x[row] /= factor[row * size + row];
  }
  for (let row = size - 1; row >= 0; row--) {
    for (let m = row + 1; m < size; m++) x[row] -= factor[m * size + row] * x[m];
    x[row] /= factor[row * size + row];
  }
  return x;
}

/** Returns the inverse of a symmetric positive definite matrix, or null when it is not positive definite. */
export function invertPositiveDefinite(matrix: Float64Array, size: number): Float64Array | null {
  const factor = choleskyFactor(matrix, size);
  if (factor === null) return null;
  const inverse = new Float64Array(size * size);
  for (let column = 0; column < size; column++) {
    const unit = new Float64Array(size);
    unit[column] = 1;
    inverse.set(solveByCholesky(factor, size, unit), column * size);
  }
  return inverse;
}
