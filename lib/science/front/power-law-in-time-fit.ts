import { fitPowerLaw, type PowerLawFit } from "@/lib/science/front/power-law-fit";

export interface PowerLawInTimeFit extends PowerLawFit {
  converged: boolean;
  iterations: number;
  /** Σ ((τ − model)/σ')² */
  chiSquare: number;
}

const MOST_ITERATIONS = 200;
const STEP_TOLERANCE = 1e-13;
const HARDEST_DAMPING = 1e12;

/** Normal equations of the two parameters at one place; `misfit` is Σ w r². */
interface NormalEquations {
  oo: number;
  os: number;
  ss: number;
  go: number;
  gs: number;
  misfit: number;
}

/** Turns values of the points into ones with independent errors of 1. */
export type Whitening = (values: Float64Array) => Float64Array;

/**
 * Returns the power law by least squares in τ itself, τ = (d/a)^γ with weights 1/σ'², or with the joint covariance that `whitening` undoes,
 * all arrays `[point]`, times in µs: Levenberg–Marquardt (Marquardt 1963) in (−γ ln a, γ), started from the fit in ln τ. NaN unless
 * converged.
 */
export function fitPowerLawInTime(
  distance: Float64Array,
  time_us: Float64Array,
  softened_us: Float64Array,
  whitening: Whitening = (values) => values.map((value, p) => value / softened_us[p]),
): PowerLawInTimeFit {
  const start = fitPowerLaw(distance, time_us, softened_us);
  const lnDistance = distance.map(Math.log);
  let { offset, slope } = start;
  let at = normalEquations(lnDistance, time_us, whitening, offset, slope);
  let damping = 1e-3;
  for (let iterations = 1; iterations <= MOST_ITERATIONS && damping < HARDEST_DAMPING; iterations++) {
    const step = dampedStep(at, damping);
    const next = normalEquations(lnDistance, time_us, whitening, offset + step.offset, slope + step.slope);
    const small =
      Math.abs(step.offset) <= STEP_TOLERANCE * (1 + Math.abs(offset)) && Math.abs(step.slope) <= STEP_TOLERANCE;
    if (next.misfit <= at.misfit) {
      offset += step.offset;
      slope += step.slope;
      at = next;
      damping /= 10;
    } else {
      damping *= 10;
    }
    if (small) return { offset, slope, ...errorsFrom(at), converged: true, iterations, chiSquare: at.misfit };
  }
  const none = { offset: NaN, slope: NaN, offsetError: NaN, slopeError: NaN, covariance: NaN };
  return { ...none, converged: false, iterations: MOST_ITERATIONS, chiSquare: NaN };
}

function normalEquations(
  lnDistance: Float64Array,
  time_us: Float64Array,
  whitening: Whitening,
  offset: number,
  slope: number,
): NormalEquations {
  const model = lnDistance.map((lnD) => Math.exp(offset + slope * lnD));
  const perOffset = whitening(model);
  const perSlope = whitening(model.map((time, j) => time * lnDistance[j]));
  const residual = whitening(model.map((time, j) => time_us[j] - time));
  const sums = { oo: 0, os: 0, ss: 0, go: 0, gs: 0, misfit: 0 };
  for (let j = 0; j < time_us.length; j++) {
    sums.oo += perOffset[j] * perOffset[j];
    sums.os += perOffset[j] * perSlope[j];
    sums.ss += perSlope[j] * perSlope[j];
    sums.go += perOffset[j] * residual[j];
    sums.gs += perSlope[j] * residual[j];
    sums.misfit += residual[j] * residual[j];
  }
  return sums;
}

function dampedStep(at: NormalEquations, damping: number): { offset: number; slope: number } {
  const oo = at.oo * (1 + damping);
  const ss = at.ss * (1 + damping);
  const determinant = oo * ss - at.os * at.os;
  return { offset: (ss * at.go - at.os * at.gs) / determinant, slope: (oo * at.gs - at.os * at.go) / determinant };
}

function errorsFrom(at: NormalEquations): { offsetError: number; slopeError: number; covariance: number } {
  const determinant = at.oo * at.ss - at.os * at.os;
  return {
    offsetError: Math.sqrt(at.ss / determinant),
    slopeError: Math.sqrt(at.oo / determinant),
    covariance: -at.os / determinant,
  };
}
