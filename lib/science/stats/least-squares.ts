/**
 * Weighted straight lines. Weights are 1/σ² of the y's, and standard errors follow from them alone: they are not
 * rescaled by χ²/dof.
 */

export interface LineFit {
  intercept: number;
  slope: number;
  interceptError: number;
  slopeError: number;
  /** Covariance of intercept and slope. */
  covariance: number;
  /** Σ w (y − model)² */
  chiSquare: number;
}

export interface OriginLineFit {
  slope: number;
  slopeError: number;
  /** Σ w (y − model)² */
  chiSquare: number;
}

/**
 * Returns the least-squares line `y = intercept + slope · x` through points of equal array length, `weights` ≥ 0.
 * x and y are centred on their weighted means first, so large offsets lose no digits. Everything is NaN when
 * fewer than two different x carry weight.
 */
export function fitWeightedLine(x: ArrayLike<number>, y: ArrayLike<number>, weights: ArrayLike<number>): LineFit {
  const { total, meanX, meanY } = weightedMeans(x, y, weights);
  let spread = 0;
  let joint = 0;
  for (let j = 0; j < x.length; j++) {
    const dx = x[j] - meanX;
    spread += weights[j] * dx * dx;
    joint += weights[j] * dx * (y[j] - meanY);
  }
  // A single x leaves rounding dust in the spread; it must not pass for a slope.
  const determined = spread > 1e-26 * total * meanX * meanX;
  const slope = determined ? joint / spread : Number.NaN;
  const slopeVariance = determined ? 1 / spread : Number.NaN;
  let chiSquare = 0;
  for (let j = 0; j < x.length; j++) {
    const residual = y[j] - meanY - slope * (x[j] - meanX);
    chiSquare += weights[j] * residual * residual;
  }
  return {
    intercept: meanY - slope * meanX,
    slope,
    interceptError: Math.sqrt(1 / total + meanX * meanX * slopeVariance),
    slopeError: Math.sqrt(slopeVariance),
    covariance: -meanX * slopeVariance,
    chiSquare,
  };
}

/** Returns the least-squares line `y = slope · x`; NaN when no point with x ≠ 0 carries weight. */
export function fitWeightedLineThroughOrigin(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  weights: ArrayLike<number>,
): OriginLineFit {
  let spread = 0;
  let joint = 0;
  for (let j = 0; j < x.length; j++) {
    spread += weights[j] * x[j] * x[j];
    joint += weights[j] * x[j] * y[j];
  }
  const slope = spread > 0 ? joint / spread : Number.NaN;
  let chiSquare = 0;
  for (let j = 0; j < x.length; j++) {
    const residual = y[j] - slope * x[j];
    chiSquare += weights[j] * residual * residual;
  }
  return { slope, slopeError: spread > 0 ? 1 / Math.sqrt(spread) : Number.NaN, chiSquare };
}

function weightedMeans(x: ArrayLike<number>, y: ArrayLike<number>, weights: ArrayLike<number>) {
  let total = 0;
  let meanX = 0;
  let meanY = 0;
  for (let j = 0; j < x.length; j++) {
    if (weights[j] === 0) continue;
    total += weights[j];
    meanX += (weights[j] / total) * (x[j] - meanX);
    meanY += (weights[j] / total) * (y[j] - meanY);
  }
  return { total, meanX, meanY };
}
