import { decimalsFor, fixed } from "@/lib/science/front/short-form";
import type { SelfTestPlan } from "@/lib/science/studies/self-test";
import type { Coverage, IntervalEstimate, ParameterTest, SelfTestRepeat, SelfTestResult } from "@/lib/science/studies/self-test-result";
import { numbersAmong } from "@/lib/science/studies/spread-of-repeats";
import { clopperPearson, mean, standardDeviation } from "@/lib/science/stats/intervals";

const NOMINAL = 0.95;
const MANY_FAILED = 0.05;
const MUCH_CHANGED = 0.01;
const LARGE_BIAS = 0.5;

/**
 * Returns bias and interval coverage of γ, v and the crossing times over the repeats, each over those repeats that carry
 * it, with Clopper–Pearson 95 % limits of the coverage.
 */
export function judgeSelfTest(plan: SelfTestPlan, repeats: readonly SelfTestRepeat[]): SelfTestResult {
  const failedFits = repeats.filter(({ gamma }) => gamma.value === null).length;
  const crossings = plan.front.crossings.map(({ trace, label, distance, tau_us }) => ({
    label,
    distance,
    ...testOf(tau_us, repeats.flatMap((repeat) => repeat.tau_us[trace] ?? [])),
  }));
  const held = crossings.reduce((sum, { coverage }) => sum + coverage.held, 0);
  const intervals = crossings.reduce((sum, { coverage }) => sum + coverage.of, 0);
  const result = {
    repeats: repeats.length,
    failedFits,
    failedShare: repeats.length === 0 ? null : failedFits / repeats.length,
    gamma: testOf(plan.front.gamma, repeats.map(({ gamma }) => gamma)),
    v_sites_per_ms: testOf(plan.front.v_sites_per_ms, repeats.map(({ v_sites_per_ms }) => v_sites_per_ms)),
    crossings,
    crossingCoverage: coverageOf(held, intervals),
    truth: plan.truth,
  };
  return { ...result, sentence: sentenceOf(result), warnings: warningsOf(result) };
}

type Judged = Omit<SelfTestResult, "sentence" | "warnings">;

function testOf(truth: number | null, estimates: readonly IntervalEstimate[]): ParameterTest {
  const values = numbersAmong(estimates.map(({ value }) => value));
  const errors = numbersAmong(estimates.map(({ error }) => error));
  const meanError = errors.length === 0 ? null : mean(errors);
  const bias = truth === null || values.length === 0 ? null : mean(values) - truth;
  const intervals = estimates.filter(({ low }) => low !== null);
  return {
    truth,
    bias,
    biasInErrors: bias === null || meanError === null || meanError === 0 ? null : bias / meanError,
    scatter: values.length < 2 ? null : standardDeviation(values),
    meanError,
    coverage: truth === null ? coverageOf(0, 0) : coverageOf(intervals.filter((interval) => holds(interval, truth)).length, intervals.length),
  };
}

/** An interval without an upper end goes to infinity. */
function holds({ low, high }: IntervalEstimate, truth: number): boolean {
  return low !== null && low <= truth && (high === null || truth <= high);
}

function coverageOf(held: number, of: number): Coverage {
  if (of === 0) return { held, of, share: null, low: null, high: null };
  const [low, high] = clopperPearson(held, of);
  return { held, of, share: held / of, low, high };
}

function sentenceOf({ gamma, repeats }: Judged): string {
  const { coverage, bias, meanError } = gamma;
  if (coverage.low === null || coverage.high === null || bias === null || meanError === null) {
    return repeats === 0 ? "No run was simulated." : `None of ${repeats} simulated runs of this size gave γ an interval.`;
  }
  const decimals = decimalsFor(meanError) + 1;
  return (
    `In ${coverage.of} simulated runs of this size the 95\u202f% interval of γ held the truth in ${coverage.held} ` +
    `(${percent(coverage.low)}–${percent(coverage.high)}\u202f%); bias ${fixed(bias, decimals)} of error ${fixed(meanError, decimals)}.`
  );
}

function percent(share: number): string {
  return fixed(100 * share, 0);
}

function warningsOf({ gamma, v_sites_per_ms, crossingCoverage, failedShare, truth }: Judged): string[] {
  const warnings: string[] = [];
  const tests = [
    ["γ", gamma],
    ["v", v_sites_per_ms],
  ] as const;
  for (const [name, { coverage, biasInErrors }] of tests) {
    warnings.push(...coverageWarnings(name, coverage));
    if (biasInErrors !== null && Math.abs(biasInErrors) > LARGE_BIAS) {
      warnings.push(`${name} is biased by ${fixed(biasInErrors, 1)} of its error in runs like this one.`);
    }
  }
  warnings.push(...coverageWarnings("the crossing times", crossingCoverage));
  if (failedShare !== null && failedShare > MANY_FAILED) {
    warnings.push(`${percent(failedShare)}\u202f% of the simulated runs allowed no power-law fit.`);
  }
  if (truth.largestChange > MUCH_CHANGED) {
    warnings.push(
      `No spins with these means have all the fitted correlations at once: at ${truth.timesChanged} times they were moved, by up to ${fixed(truth.largestChange, 2)}. The truth is what was simulated, read by the same extractor.`,
    );
  }
  return warnings;
}

function coverageWarnings(name: string, { share, low, high }: Coverage): string[] {
  if (share === null || low === null || high === null) return [];
  if (high < NOMINAL) return [`The 95\u202f% intervals of ${name} are too narrow here: they held the truth in ${percent(share)}\u202f% of the simulated runs.`];
  if (low > NOMINAL) return [`The 95\u202f% intervals of ${name} are wider than need be here: they held the truth in ${percent(share)}\u202f% of the simulated runs.`];
  return [];
}
