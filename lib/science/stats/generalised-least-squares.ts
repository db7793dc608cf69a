import { choleskyFactor } from "@/lib/science/stats/cholesky";

/** A straight line by generalised least squares (Aitken 1936); errors follow from the covariance alone, not rescaled. */
export interface GeneralisedLine {
  intercept: number;
  slope: number;
  interceptError: number;
  slopeError: number;
  /** Covariance of intercept and slope. */
  covariance: number;
  /** rᵀ S⁻¹ r of the residuals. */
  chiSquare: number;
}

const NO_LINE: GeneralisedLine = {
  intercept: Number.NaN,
  slope: Number.NaN,
  interceptError: Number.NaN,
  slopeError: Number.NaN,
  covariance: Number.NaN,
  chiSquare: Number.NaN,
};

/** Returns L⁻¹ v for a lower Cholesky factor L `[row][column]`: values whose covariance L Lᵀ becomes the unit matrix. */
export function whiten(factor: Float64Array, values: ArrayLike<number>): Float64Array {
  const size = values.length;
  const white = new Float64Array(size);
  for (let row = 0; row < size; row++) {
    let sum = values[row];
    for (let column = 0; column < row; column++) sum -= factor[row * size + column] * white[column];
    white[row] = sum / factor[row * size + row];
  }
  return white;
}

/** Returns rᵀ S⁻¹ r for a covariance S `[row][column]`; NaN when it is not positive definite. */
export function generalisedChiSquare(residuals: ArrayLike<number>, covariance: Float64Array): number {
  const factor = choleskyFactor(covariance, residuals.length);
  return factor === null ? Number.NaN : sumOfProducts(whiten(factor, residuals), whiten(factor, residuals));
}

/**
 * Returns the line `y = intercept + slope · x` for y with covariance S `[row][column]`; through the origin the intercept is exactly 0
 * and has no error. Everything is NaN when S is not positive definite or the x do not determine it.
 */
export function fitGeneralisedLine(x: ArrayLike<number>, y: ArrayLike<number>, covariance: Float64Array, throughOrigin: boolean): GeneralisedLine {
  const factor = choleskyFactor(covariance, y.length);
  if (factor === null) return NO_LINE;
  const whiteX = whiten(factor, x);
  const whiteY = whiten(factor, y);
  const whiteOnes = whiten(factor, new Float64Array(y.length).fill(1));
  return throughOrigin ? originLine(whiteX, whiteY) : freeLine(whiteOnes, whiteX, whiteY);
}

function originLine(x: Float64Array, y: Float64Array): GeneralisedLine {
  const spread = sumOfProducts(x, x);
  if (!(spread > 0)) return NO_LINE;
  const slope = sumOfProducts(x, y) / spread;
  return { ...NO_LINE, intercept: 0, slope, slopeError: 1 / Math.sqrt(spread), chiSquare: misfit(y, x, slope, x, 0) };
}

function freeLine(ones: Float64Array, x: Float64Array, y: Float64Array): GeneralisedLine {
  const total = sumOfProducts(ones, ones);
  const mean = sumOfProducts(ones, x) / total;
  // Centred on the weighted mean, so that large offsets lose no digits.
  const centred = x.map((value, n) => value - mean * ones[n]);
  const spread = sumOfProducts(centred, centred);
  if (!(spread > 1e-26 * sumOfProducts(x, x))) return NO_LINE;
  const slope = sumOfProducts(centred, y) / spread;
  const atMean = sumOfProducts(ones, y) / total;
  return {
    intercept: atMean - slope * mean,
    slope,
    interceptError: Math.sqrt(1 / total + (mean * mean) / spread),
    slopeError: 1 / Math.sqrt(spread),
    covariance: -mean / spread,
    chiSquare: misfit(y, ones, atMean, centred, slope),
  };
}

function misfit(y: Float64Array, first: Float64Array, a: number, second: Float64Array, b: number): number {
  let sum = 0;
  for (let n = 0; n < y.length; n++) sum += (y[n] - a * first[n] - b * second[n]) ** 2;
  return sum;
}

function sumOfProducts(first: Float64Array, second: Float64Array): number {
  let sum = 0;
  for (let n = 0; n < first.length; n++) sum += first[n] * second[n];
  return sum;
}
