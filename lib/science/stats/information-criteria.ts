/** Information criteria of fits whose errors are known, up to the constant that both models share. */

/**
 * Returns AICc = χ² + 2p + 2p(p + 1)/(n − p − 1) for `parameters` p and `points` n (Hurvich and Tsai 1989);
 * null when n ≤ p + 1, where it is undefined.
 */
export function aicc(chiSquare: number, parameters: number, points: number): number | null {
  if (points <= parameters + 1) return null;
  return chiSquare + 2 * parameters + (2 * parameters * (parameters + 1)) / (points - parameters - 1);
}

/** Returns BIC = χ² + p ln n (Schwarz 1978). */
export function bic(chiSquare: number, parameters: number, points: number): number {
  return chiSquare + parameters * Math.log(points);
}
