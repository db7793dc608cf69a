import { describe, expect, test } from "vitest";
import { compareFits } from "@/lib/science/front/comparison";
import { fitQuality } from "@/lib/science/front/fit-quality";
import { softenErrors, type FrontPoints } from "@/lib/science/front/front-points";
import { fitLinearFront } from "@/lib/science/front/linear-fit";
import { amplitudeErrorOf, amplitudeOf, fitPowerLaw } from "@/lib/science/front/power-law-fit";
import { fitPowerLawInTime } from "@/lib/science/front/power-law-in-time-fit";
import { expectedRun, RUN_NAMES, type ExpectedRun } from "./run-fixtures";

function pointsOfRun({ deterministic, statistical }: ExpectedRun): FrontPoints {
  const { status, crossing_us, crossingError_us } = statistical;
  const used = status.flatMap((text, j) => (text === "resolved" && (crossingError_us[j] ?? 0) > 0 ? [j] : []));
  const error_us = Float64Array.from(used, (j) => crossingError_us[j] ?? NaN);
  return {
    trace: Int32Array.from(used),
    distance: Float64Array.from(used, (j) => deterministic.distances[j]),
    time_us: Float64Array.from(used, (j) => crossing_us[j] ?? NaN),
    error_us,
    softened_us: softenErrors(error_us),
    covariance: null,
  };
}

function expectRelative(actual: number | null, expected: number, tolerance = 1e-9) {
  expect(Math.abs((actual ?? NaN) / expected - 1)).toBeLessThan(tolerance);
}

describe.each(RUN_NAMES)("weighted fits to the points of %s, made independently with NumPy", (name) => {
  const run = expectedRun(name);
  const points = pointsOfRun(run);

  test("the straight line has the same parameters, errors, χ², p-value and criteria", () => {
    const expected = run.statistical.linear;
    const fit = fitLinearFront(points.distance, points.time_us, points.softened_us, false);
    expectRelative(fit.offset, expected.t0_us);
    expectRelative(1 / fit.slope, expected.v_sites_per_us);
    expectRelative(fit.offsetError, expected.t0_error);
    expectRelative(fit.slopeError / fit.slope ** 2, expected.v_error);
    const quality = fitQuality(
      points,
      points.distance.map((d) => fit.offset + fit.slope * d),
      2,
      0,
    );
    expect([quality.n, quality.dof]).toEqual([expected.n, expected.dof]);
    expectRelative(quality.chi2, expected.chi2);
    expectRelative(quality.pValue, expected.p_value);
    expectRelative(quality.aicc, expected.aicc);
    expectRelative(quality.bic, expected.bic);
  });

  test("the power law has the same parameters, errors, χ², p-value and criteria", () => {
    const expected = run.statistical.powerLaw;
    const fit = fitPowerLaw(points.distance, points.time_us, points.softened_us);
    expectRelative(fit.slope, expected.gamma);
    expectRelative(fit.slopeError, expected.gamma_error);
    expectRelative(1 / fit.slope, expected.beta);
    expectRelative(fit.slopeError / fit.slope ** 2, expected.beta_error);
    expectRelative(amplitudeOf(fit.offset, fit.slope), expected.a);
    const model_us = points.distance.map((d) => Math.exp(fit.offset + fit.slope * Math.log(d)));
    const quality = fitQuality(points, model_us, 2, 0);
    expect([quality.n, quality.dof]).toEqual([expected.n, expected.dof]);
    expectRelative(quality.chi2, expected.chi2);
    expectRelative(quality.pValue, expected.p_value);
    expectRelative(quality.aicc, expected.aicc);
    expectRelative(quality.bic, expected.bic);
  });
});

describe("the power law in τ itself", () => {
  // NIST StRD, DanWood: y = b1 x^b2, certified values and standard deviations.
  const x = Float64Array.of(1.309, 1.471, 1.49, 1.565, 1.611, 1.68);
  const y = Float64Array.of(2.138, 3.421, 3.597, 4.34, 4.882, 5.66);
  const fit = fitPowerLawInTime(
    x,
    y,
    x.map(() => 1),
  );

  test("reproduces the certified parameters of NIST DanWood", () => {
    expect(fit.converged).toBe(true);
    expectRelative(Math.exp(fit.offset), 7.6886226176e-1);
    expectRelative(fit.slope, 3.8604055871);
    expectRelative(fit.chiSquare, 4.3173084083e-3);
  });

  test("reproduces the certified standard deviations of NIST DanWood after scaling by the residuals", () => {
    const residual = Math.sqrt(fit.chiSquare / 4);
    expectRelative(residual * fit.slopeError, 5.1726610913e-2);
    expectRelative(residual * fit.offsetError * Math.exp(fit.offset), 1.828197386e-2);
  });

  test("agrees with the fit in ln τ on exact power-law points, whatever the weights", () => {
    const distance = Float64Array.of(1, 2, 3, 5, 8, 13);
    const time_us = distance.map((d) => (d / 0.07) ** 0.62);
    const softened_us = Float64Array.of(1, 3, 0.5, 2, 1, 4);
    for (const exact of [
      fitPowerLaw(distance, time_us, softened_us),
      fitPowerLawInTime(distance, time_us, softened_us),
    ]) {
      expectRelative(exact.slope, 0.62, 1e-12);
      expectRelative(amplitudeOf(exact.offset, exact.slope), 0.07, 1e-11);
    }
  });
});

describe("fit options and derived quantities", () => {
  test("through the origin is Σ w d τ / Σ w d² without an offset", () => {
    const fit = fitLinearFront(Float64Array.of(1, 2, 4), Float64Array.of(3, 5, 9), Float64Array.of(1, 1, 2), true);
    expect(fit.offset).toBe(0);
    expect(fit.slope).toBeCloseTo((3 + 10 + 9) / (1 + 4 + 4), 12);
    expect(fit.slopeError).toBeCloseTo(1 / 3, 12);
  });

  test("errors are softened by the median of those used", () => {
    expect([...softenErrors(Float64Array.of(3, 4, 100))]).toEqual([5, Math.hypot(4, 4), Math.hypot(100, 4)]);
  });

  test("the error of a agrees with small steps of offset and slope along their covariance", () => {
    const [offset, slope, step] = [2, 0.6, 1e-6];
    const perOffset = (amplitudeOf(offset + step, slope) - amplitudeOf(offset - step, slope)) / (2 * step);
    const perSlope = (amplitudeOf(offset, slope + step) - amplitudeOf(offset, slope - step)) / (2 * step);
    const variances = { offset: 0.04, slope: 0.01, covariance: -0.015 };
    const variance = perOffset ** 2 * 0.04 + 2 * perOffset * perSlope * -0.015 + perSlope ** 2 * 0.01;
    expectRelative(amplitudeErrorOf(offset, slope, variances), Math.sqrt(variance), 1e-7);
  });

  test("the comparison is power law minus linear, without an AICc for three points", () => {
    const { linear, powerLaw } = expectedRun("xy-chain-12").statistical;
    const points = pointsOfRun(expectedRun("xy-chain-12"));
    const flat = fitQuality(points, points.time_us, 2, 0);
    const comparison = compareFits(
      { ...flat, aicc: linear.aicc, bic: linear.bic },
      { ...flat, aicc: powerLaw.aicc, bic: powerLaw.bic },
    );
    expect(comparison.deltaAicc).toBeCloseTo(17.551453549869773 - 36.326885568734106, 9);
    expect(comparison.deltaBic).toBeCloseTo(16.847244095466515 - 35.622676114330844, 9);
    expect(compareFits({ ...flat, aicc: null }, flat).deltaAicc).toBeNull();
    expect(compareFits(null, flat)).toEqual({ deltaAicc: null, deltaBic: null });
  });
});
