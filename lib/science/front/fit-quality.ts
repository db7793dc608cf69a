import type { FitQuality } from "@/lib/science/front/front-result";
import type { FrontPoints } from "@/lib/science/front/front-points";
import { aicc, bic } from "@/lib/science/stats/information-criteria";
import { generalisedChiSquare } from "@/lib/science/stats/generalised-least-squares";
import { chiSquareSurvival } from "@/lib/science/stats/special-functions";

/** Returns χ² with the plain errors σ_j, or with the joint covariance where the points have one, its p-value, the information criteria and the residuals of a model. */
export function fitQuality(
  points: FrontPoints,
  model_us: Float64Array,
  parameters: number,
  replicatesFitted: number,
): FitQuality {
  const n = points.time_us.length;
  const residuals_us = Array.from(points.time_us, (time, j) => time - model_us[j]);
  const chi2 =
    points.covariance === null
      ? residuals_us.reduce((sum, residual, j) => sum + (residual / points.error_us[j]) ** 2, 0)
      : generalisedChiSquare(residuals_us, points.covariance);
  const dof = n - parameters;
  return {
    chi2,
    dof,
    pValue: chiSquareSurvival(chi2, dof),
    aicc: aicc(chi2, parameters, n),
    bic: bic(chi2, parameters, n),
    n,
    residuals_us,
    replicatesFitted,
  };
}
