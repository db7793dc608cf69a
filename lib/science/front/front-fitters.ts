import { submatrix, type FrontPoints } from "@/lib/science/front/front-points";
import { fitLinearFront } from "@/lib/science/front/linear-fit";
import { fitPowerLaw } from "@/lib/science/front/power-law-fit";
import { fitPowerLawInTime } from "@/lib/science/front/power-law-in-time-fit";
import type { FittedLine, FrontFitter } from "@/lib/science/front/replicate-fits";
import { choleskyFactor } from "@/lib/science/stats/cholesky";
import { fitGeneralisedLine, whiten } from "@/lib/science/stats/generalised-least-squares";

/** Returns the fitter of τ = t₀ + d/v to these points or some of them, weighted as the points say. */
export function linearFitter(points: FrontPoints, throughOrigin: boolean): FrontFitter {
  const { covariance } = points;
  if (covariance === null) {
    return (distance, time_us, softened_us) => ({ covariance: Number.NaN, ...fitLinearFront(distance, time_us, softened_us, throughOrigin) });
  }
  return (distance, time_us, softened_us, places) =>
    asFittedLine(fitGeneralisedLine(distance, time_us, softenedCovariance(covariance, points.trace.length, places, softened_us), throughOrigin));
}

/** Returns the fitter of d = a τ^β, in ln τ or in τ itself, weighted as the points say. */
export function powerLawFitter(points: FrontPoints, fittedIn: "log-time" | "time"): FrontFitter {
  const { covariance } = points;
  const size = points.trace.length;
  if (fittedIn === "time") {
    return (distance, time_us, softened_us, places) => {
      if (covariance === null) return fitPowerLawInTime(distance, time_us, softened_us);
      const factor = choleskyFactor(softenedCovariance(covariance, size, places, softened_us), places.length);
      return fitPowerLawInTime(distance, time_us, softened_us, factor === null ? undefined : (values) => whiten(factor, values));
    };
  }
  if (covariance === null) return fitPowerLaw;
  return (distance, time_us, softened_us, places) => {
    const joint = softenedCovariance(covariance, size, places, softened_us);
    const inLogarithms = joint.map((value, at) => value / (time_us[Math.floor(at / places.length)] * time_us[at % places.length]));
    return asFittedLine(fitGeneralisedLine(distance.map(Math.log), time_us.map(Math.log), inLogarithms, false));
  };
}

function asFittedLine(line: ReturnType<typeof fitGeneralisedLine>): FittedLine {
  return { offset: line.intercept, slope: line.slope, offsetError: line.interceptError, slopeError: line.slopeError, covariance: line.covariance };
}

/** The points' joint covariance with the variances softened as the weights of independent points are. */
function softenedCovariance(covariance: Float64Array, size: number, places: Int32Array, softened_us: Float64Array): Float64Array {
  const part = submatrix(covariance, size, places);
  for (let p = 0; p < places.length; p++) part[p * places.length + p] = softened_us[p] ** 2;
  return part;
}
