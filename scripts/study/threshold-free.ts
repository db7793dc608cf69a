/**
 * Where counts read without a threshold beat thresholding: simulated pairs of sites with Poisson counts whose laws are known, three
 * estimates of the same correlator from the same shots.
 */
import { covarianceLaw, errorBarOfLaw, pairLaw, scaledLaw } from "@/lib/science/correlators/bootstrap-law";
import { advisePoissonThreshold, poissonErrorRates } from "@/lib/science/detection/threshold";
import { createRandomStream, type RandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { poissonCountLaw, type CountLaw } from "@/lib/science/threshold-free/count-laws";
import { fitPairOutcomes } from "@/lib/science/threshold-free/pair-likelihood";
import { tallyPair } from "@/lib/science/threshold-free/pair-tally";
import { soften, softCovariance, softPairMoments } from "@/lib/science/threshold-free/soft-moments";
import { softenCounts } from "@/lib/science/threshold-free/soft-spins";
import { softWeights, type SoftWeights } from "@/lib/science/threshold-free/soft-weights";

/** What is simulated in one row of the table. */
interface ThresholdFreeCase {
  dark: number;
  bright: number;
  /** ⟨σ⟩ of both sites. */
  mean: number;
  correlator: number;
  shots: number;
}

/** What one estimate was worth. */
interface Performance {
  /** Root of the mean squared error. */
  rms: number;
  /** Share of the 95 % intervals that hold the truth. */
  coverage: number;
}

export interface ThresholdFreeRow extends ThresholdFreeCase {
  /** (ε_d + ε_b)/2 at the advised threshold. */
  readoutError: number;
  /** Information that the counts keep, and that the threshold keeps, at even chances. */
  retained: number;
  retainedByThreshold: number;
  threshold: Performance;
  soft: Performance;
  likelihood: Performance;
}

/** Dark and bright rates, from hardly any overlap to a fifth of the shots misread. */
const RATES = [[1, 12], [1, 8], [2, 9], [2, 8], [3, 9], [3, 8], [4, 9], [4, 8], [3, 6]] as const;
const CORRELATORS = [0, 0.1, 0.4];
const SHOTS = [250, 1000];
const MEANS = [0, -0.6];
const Z_95 = 1.959963984540054;

interface Estimate {
  value: number;
  low: number;
  high: number;
}

/** A case with everything that does not change from repeat to repeat. */
interface Prepared {
  row: ThresholdFreeCase;
  law: CountLaw;
  weights: SoftWeights;
  threshold: number;
  /** 1/F² */
  correction: number;
  /** `[outcome]`, cumulative shares of `[++, +−, −+, −−]`. */
  outcomes: number[];
  /** `[bin]`, cumulative. */
  darkUpTo: Float64Array;
  brightUpTo: Float64Array;
}

/** Returns the study's rows, the same for the same seed and repeats. `cases` are simulated, all of the table's without. */
export function thresholdFreeStudy(seed: number, repeats: number, cases: readonly ThresholdFreeCase[] = allCases()): ThresholdFreeRow[] {
  return cases.map((row, index) => studyCase(prepare(row), seed, repeats, index));
}

function allCases(): ThresholdFreeCase[] {
  const grid = MEANS.flatMap((mean) => SHOTS.flatMap((shots) => CORRELATORS.map((correlator) => ({ mean, shots, correlator }))));
  return RATES.flatMap(([dark, bright]) => grid.map((rest) => ({ dark, bright, ...rest })));
}

function prepare(row: ThresholdFreeCase): Prepared {
  const { dark, bright, mean, correlator } = row;
  const law = poissonCountLaw({ dark, bright, brightWeight: (1 + mean) / 2 });
  const weights = softWeights(law, "up");
  if (weights === null) throw new RangeError(`Rates ${dark} and ${bright} cannot be told apart`);
  const threshold = advisePoissonThreshold(dark, bright);
  const { falseBright, falseDark } = poissonErrorRates(threshold, dark, bright);
  const share = (i: number, j: number) => ((1 + i * mean) * (1 + j * mean) + i * j * correlator) / 4;
  return {
    row,
    law,
    weights,
    threshold,
    correction: (1 - falseBright - falseDark) ** -2,
    outcomes: cumulative([share(1, 1), share(1, -1), share(-1, 1), share(-1, -1)]),
    darkUpTo: Float64Array.from(cumulative(law.dark)),
    brightUpTo: Float64Array.from(cumulative(law.bright)),
  };
}

function cumulative(shares: ArrayLike<number>): number[] {
  let sum = 0;
  return Array.from(shares, (share) => (sum += share));
}

function studyCase(prepared: Prepared, seed: number, repeats: number, index: number): ThresholdFreeRow {
  const { row, weights, threshold } = prepared;
  const found: Record<"threshold" | "soft" | "likelihood", Estimate[]> = { threshold: [], soft: [], likelihood: [] };
  for (let repeat = 0; repeat < repeats; repeat++) {
    const counts = drawCounts(prepared, createRandomStream(seed, RANDOM_PURPOSES.thresholdFreeStudy, index, repeat));
    found.threshold.push(byThreshold(prepared, counts));
    found.soft.push(bySoftSpins(prepared, counts));
    found.likelihood.push(byLikelihood(prepared, counts));
  }
  const { falseBright, falseDark } = poissonErrorRates(threshold, row.dark, row.bright);
  const readsBright = (1 + falseBright - falseDark) / 2;
  return {
    ...row,
    readoutError: (falseBright + falseDark) / 2,
    retained: weights.retained,
    retainedByThreshold: (1 - falseBright - falseDark) ** 2 / (4 * readsBright * (1 - readsBright)),
    threshold: judge(found.threshold, row.correlator),
    soft: judge(found.soft, row.correlator),
    likelihood: judge(found.likelihood, row.correlator),
  };
}

/** `[shot][2]` */
function drawCounts({ row, outcomes, darkUpTo, brightUpTo }: Prepared, stream: RandomStream): Uint16Array {
  const counts = new Uint16Array(2 * row.shots);
  for (let s = 0; s < row.shots; s++) {
    const outcome = drawFrom(outcomes, stream);
    counts[2 * s] = drawFrom(outcome < 2 ? brightUpTo : darkUpTo, stream);
    counts[2 * s + 1] = drawFrom(outcome % 2 === 0 ? brightUpTo : darkUpTo, stream);
  }
  return counts;
}

function drawFrom(upTo: ArrayLike<number>, stream: RandomStream): number {
  const u = stream.nextUniform();
  let n = 0;
  while (n < upTo.length - 1 && u >= upTo[n]) n += 1;
  return n;
}

/** Readings corrected with the exact error rates; percentile interval of the bootstrap law. */
function byThreshold({ row, threshold, correction }: Prepared, counts: Uint16Array): Estimate {
  const outcomes: [number, number, number, number] = [0, 0, 0, 0];
  for (let s = 0; s < row.shots; s++) outcomes[(counts[2 * s] > threshold ? 0 : 2) + (counts[2 * s + 1] > threshold ? 0 : 1)] += 1;
  const [both, onlyI, onlyJ] = outcomes;
  const value = (4 * correction * (row.shots * both - (both + onlyI) * (both + onlyJ))) / row.shots ** 2;
  const { low, high } = errorBarOfLaw(scaledLaw(pairLaw(outcomes), correction), value, "percentile", 0);
  return { value, low, high };
}

/** Covariance of soft spins; percentile interval of its bootstrap law. */
function bySoftSpins({ row, weights }: Prepared, counts: Uint16Array): Estimate {
  const sums = soften(softenCounts(counts, row.shots, 2, [weights.value, weights.value]));
  const value = softCovariance(sums, row.shots, 0, 1);
  const law = covarianceLaw(softPairMoments(sums, row.shots, 0, 1, value), row.shots);
  const { low, high } = errorBarOfLaw(law, value, "percentile", 0);
  return { value, low, high };
}

/** Maximum likelihood; normal interval by the observed information. */
function byLikelihood({ law }: Prepared, counts: Uint16Array): Estimate {
  const { correlator: value, error } = fitPairOutcomes(tallyPair(counts, 2, 0, 1, law.dark.length, law.dark.length), law, law, "up");
  return { value, low: value - Z_95 * error, high: value + Z_95 * error };
}

function judge(estimates: readonly Estimate[], truth: number): Performance {
  let squares = 0;
  let held = 0;
  for (const { value, low, high } of estimates) {
    squares += (value - truth) ** 2;
    if (low <= truth && truth <= high) held += 1;
  }
  return { rms: Math.sqrt(squares / estimates.length), coverage: held / estimates.length };
}

/** Returns the rows as a Markdown table. */
export function thresholdFreeTable(rows: readonly ThresholdFreeRow[]): string {
  const head = [
    "| λ dark / bright | readout error | ⟨σ⟩ | C | M | RMS threshold | soft / threshold | likelihood / threshold | coverage threshold | soft | likelihood |",
    "|---|---|---|---|---|---|---|---|---|---|---|",
  ];
  return [...head, ...rows.map(tableRow)].join("\n");
}

function tableRow({ dark, bright, readoutError, mean, correlator, shots, threshold, soft, likelihood }: ThresholdFreeRow): string {
  const percent = (share: number) => `${(100 * share).toFixed(1)} %`;
  const ratio = ({ rms }: Performance) => (rms / threshold.rms).toFixed(3);
  const coverages = [threshold, soft, likelihood].map(({ coverage }) => percent(coverage));
  return `| ${[`${dark} / ${bright}`, percent(readoutError), mean, correlator, shots, threshold.rms.toFixed(4), ratio(soft), ratio(likelihood), ...coverages].join(" | ")} |`;
}

/** Returns the rows as a shorter Markdown table: one line for each pair of rates and ⟨σ⟩, with the range over C and M and the mean coverage. */
export function thresholdFreeSummary(rows: readonly ThresholdFreeRow[]): string {
  const head = [
    "| λ dark / bright | readout error | ⟨σ⟩ | RMS soft / threshold | RMS likelihood / threshold | coverage threshold | soft | likelihood |",
    "|---|---|---|---|---|---|---|---|",
  ];
  const groups = new Map<string, ThresholdFreeRow[]>();
  for (const row of rows) {
    const key = `${row.dark} / ${row.bright}, ${row.mean}`;
    groups.set(key, [...(groups.get(key) ?? []), row]);
  }
  return [...head, ...Array.from(groups.values(), summaryRow)].join("\n");
}

function summaryRow(rows: readonly ThresholdFreeRow[]): string {
  const [{ dark, bright, readoutError, mean }] = rows;
  const range = (name: "soft" | "likelihood") => {
    const ratios = rows.map((row) => row[name].rms / row.threshold.rms);
    return `${Math.min(...ratios).toFixed(3)} to ${Math.max(...ratios).toFixed(3)}`;
  };
  const coverage = (name: "threshold" | "soft" | "likelihood") => `${((100 * rows.reduce((sum, row) => sum + row[name].coverage, 0)) / rows.length).toFixed(1)} %`;
  const cells = [`${dark} / ${bright}`, `${(100 * readoutError).toFixed(1)} %`, mean, range("soft"), range("likelihood"), coverage("threshold"), coverage("soft"), coverage("likelihood")];
  return `| ${cells.join(" | ")} |`;
}
