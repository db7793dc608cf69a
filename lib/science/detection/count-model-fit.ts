import { LEAST_LOG, type CountModel } from "@/lib/science/detection/count-model";
import type { CountTally } from "@/lib/science/detection/count-tally";
import { choleskyFactor, invertPositiveDefinite, solveByCholesky } from "@/lib/science/stats/cholesky";

/** A model's most likely parameters for one site's counts. */
export interface CountModelFit {
  /** `[parameter]`, on the model's own scale. */
  place: Float64Array;
  /** `[parameter][parameter]`; parameters at the edge of their range count as known. */
  covariance: Float64Array;
  logLikelihood: number;
  converged: boolean;
}

const MOST_STEPS = 80;
const SMALL_GAIN = 1e-9;
const DIFFERENCE = 1e-5;
const HARDEST_DAMPING = 1e9;
const LARGEST_LOG = 14;

interface Slopes {
  gradient: Float64Array;
  /** Σ f (∂p/p)(∂p/p)ᵀ */
  information: Float64Array;
}

/**
 * Returns the maximum-likelihood fit of a model, from where its start lies: damped scoring with the outer product of the scores as
 * information (Berndt, Hall, Hall and Hausman 1974), every step uphill.
 */
export function fitCountModel(model: CountModel, tally: CountTally, start: Float64Array): CountModelFit {
  let place = start;
  let logLikelihood = logLikelihoodAt(model, tally, place);
  let damping = 1e-3;
  let converged = false;
  let slopes = slopesAt(model, tally, place);
  for (let step = 0; step < MOST_STEPS && damping < HARDEST_DAMPING && !converged; step++) {
    const next = stepFrom(place, slopes, damping);
    const reached = next === null ? Number.NEGATIVE_INFINITY : logLikelihoodAt(model, tally, next);
    if (next !== null && reached >= logLikelihood) {
      converged = reached - logLikelihood < SMALL_GAIN * Math.abs(logLikelihood);
      place = next;
      logLikelihood = reached;
      slopes = slopesAt(model, tally, place);
      damping = Math.max(1e-9, damping / 10);
    } else {
      damping *= 10;
    }
  }
  return { place, covariance: covarianceOf(slopes), logLikelihood, converged };
}

function stepFrom(place: Float64Array, { gradient, information }: Slopes, damping: number): Float64Array | null {
  const size = place.length;
  const damped = information.slice();
  for (let m = 0; m < size; m++) damped[m * size + m] = damped[m * size + m] * (1 + damping) + 1e-9;
  const factor = choleskyFactor(damped, size);
  if (factor === null) return null;
  const step = solveByCholesky(factor, size, gradient);
  return place.map((value, m) => Math.min(LARGEST_LOG, Math.max(LEAST_LOG, value + Math.min(2, Math.max(-2, step[m])))));
}

function densitiesAt(model: CountModel, tally: CountTally, place: Float64Array): Float64Array {
  const components = model.components(place);
  const { brightWeight } = components;
  return tally.counts.map((n) => brightWeight * model.brightDensity(n, components) + (1 - brightWeight) * model.darkDensity(n, components));
}

function logLikelihoodAt(model: CountModel, tally: CountTally, place: Float64Array): number {
  const densities = densitiesAt(model, tally, place);
  return densities.reduce((sum, p, e) => sum + tally.frequencies[e] * Math.log(p), 0);
}

function slopesAt(model: CountModel, tally: CountTally, place: Float64Array): Slopes {
  const size = place.length;
  const densities = densitiesAt(model, tally, place);
  const scores = Array.from({ length: size }, (_, m) => {
    const shifted = (by: number) => densitiesAt(model, tally, place.map((value, other) => (other === m ? value + by : value)));
    const [above, below] = [shifted(DIFFERENCE), shifted(-DIFFERENCE)];
    return densities.map((p, e) => (above[e] - below[e]) / (2 * DIFFERENCE * p));
  });
  const gradient = Float64Array.from(scores, (score) => score.reduce((sum, value, e) => sum + tally.frequencies[e] * value, 0));
  const information = new Float64Array(size * size);
  for (let m = 0; m < size; m++) {
    for (let q = 0; q < size; q++) information[m * size + q] = scores[m].reduce((sum, value, e) => sum + tally.frequencies[e] * value * scores[q][e], 0);
  }
  return { gradient, information };
}

/** Below this information a parameter, on its logarithmic scale, is at the edge of its range. */
const NO_INFORMATION = 1e-3;

function covarianceOf({ information }: Slopes): Float64Array {
  const size = Math.sqrt(information.length);
  const known = Array.from({ length: size }, (_, m) => information[m * size + m] < NO_INFORMATION);
  const kept = information.map((value, at) => {
    const [row, column] = [Math.floor(at / size), at % size];
    if (known[row] || known[column]) return row === column ? 1 : 0;
    return value;
  });
  const inverse = invertPositiveDefinite(kept, size) ?? new Float64Array(size * size).fill(Number.NaN);
  return inverse.map((value, at) => (known[Math.floor(at / size)] || known[at % size] ? 0 : value));
}
