import { choleskyFactor } from "@/lib/science/stats/cholesky";
import type { RandomStream } from "@/lib/science/stats/philox";
import { drawNormal } from "@/lib/science/stats/random-variates";

/**
 * Spins as the signs of a Gaussian field with correlation ρ = 0.999 exp(−(d/l)²): C = (2/π) asin ρ (Sheppard 1899). With
 * l = a·t the front is straight by construction. Returns a function that draws one shot, `[site]`, true where up.
 */
export function gaussianSurrogate(sites: number, correlationLength: number): (stream: RandomStream) => boolean[] {
  const covariance = new Float64Array(sites * sites);
  for (let i = 0; i < sites; i++) {
    for (let j = 0; j < sites; j++) covariance[i * sites + j] = i === j ? 1 : 0.999 * Math.exp(-(((i - j) / correlationLength) ** 2));
  }
  const factor = choleskyFactor(covariance, sites);
  if (factor === null) throw new RangeError(`a correlation length of ${correlationLength} makes no covariance`);
  return (stream) => {
    const noise = Float64Array.from({ length: sites }, () => drawNormal(stream));
    return Array.from({ length: sites }, (_, i) => {
      let field = 0;
      for (let j = 0; j <= i; j++) field += factor[i * sites + j] * noise[j];
      return field > 0;
    });
  };
}
