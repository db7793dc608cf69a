import type { CountTally } from "@/lib/science/detection/count-tally";
import {
  mixtureDerivatives,
  mixtureLogLikelihood,
  stepMixtureByEm,
  type MixtureParameters,
} from "@/lib/science/detection/poisson-mixture-likelihood";
import { choleskyFactor, solveByCholesky } from "@/lib/science/stats/cholesky";

export interface AscentResult {
  parameters: MixtureParameters;
  logLikelihood: number;
  iterations: number;
  /** False when the iterations ran out first, as on the way to a dark rate of 0. */
  converged: boolean;
}

const EM_STEPS = 40;
const NEWTON_STEPS = 200;
const SETTLED = 1e-9;
/** Largest change of a logarithm in one step. */
const STRIDE = 2;

/** Returns where a fixed number of EM steps leads; enough to tell good starts from bad ones. */
export function climbByEm(tally: CountTally, start: MixtureParameters): AscentResult {
  let parameters = start;
  for (let step = 0; step < EM_STEPS; step++) parameters = stepMixtureByEm(tally, parameters);
  return {
    parameters,
    logLikelihood: mixtureLogLikelihood(tally, parameters),
    iterations: EM_STEPS,
    converged: false,
  };
}

/**
 * Returns the maximum reached from an interior point by Newton steps on (ln dark, ln bright, logit weight), damped
 * after Levenberg and Marquardt so that the likelihood never falls. EM alone takes thousands of steps where the
 * components overlap; Newton needs some ten, and ends at rounding.
 */
export function climbByNewton(tally: CountTally, start: AscentResult): AscentResult {
  let { parameters, logLikelihood } = start;
  let damping = 1e-3;
  for (let step = 1; step <= NEWTON_STEPS; step++) {
    const move = dampedMove(tally, parameters, damping);
    const next = move === null ? null : moved(parameters, move);
    const value = next === null ? Number.NaN : mixtureLogLikelihood(tally, next);
    const rounding = 1e-13 * Math.abs(logLikelihood);
    if (move !== null && next !== null && value >= logLikelihood - rounding) {
      parameters = next;
      logLikelihood = value;
      damping = damping < 1e-8 ? 0 : damping / 10;
      const settled = damping === 0 && move.every((change) => Math.abs(change) < SETTLED);
      if (settled) return { parameters, logLikelihood, iterations: start.iterations + step, converged: true };
    } else {
      damping = Math.max(damping * 10, 1e-6);
    }
  }
  return { parameters, logLikelihood, iterations: start.iterations + NEWTON_STEPS, converged: false };
}

function dampedMove(tally: CountTally, parameters: MixtureParameters, damping: number): Float64Array | null {
  const { gradient, information } = mixtureDerivatives(tally, parameters);
  const { dark, bright, brightWeight } = parameters;
  // Damped by the complete-data information, which is positive wherever the observed one is not.
  information[0] += damping * tally.shots * (1 - brightWeight) * dark;
  information[4] += damping * tally.shots * brightWeight * bright;
  information[8] += damping * tally.shots * brightWeight * (1 - brightWeight);
  const factor = choleskyFactor(information, 3);
  if (factor === null) return null;
  const move = solveByCholesky(factor, 3, gradient);
  const longest = Math.max(...move.map(Math.abs));
  return longest > STRIDE ? move.map((change) => (change * STRIDE) / longest) : move;
}

function moved(parameters: MixtureParameters, move: Float64Array): MixtureParameters {
  const odds = (parameters.brightWeight / (1 - parameters.brightWeight)) * Math.exp(move[2]);
  return {
    dark: parameters.dark * Math.exp(move[0]),
    bright: parameters.bright * Math.exp(move[1]),
    brightWeight: odds / (1 + odds),
  };
}
