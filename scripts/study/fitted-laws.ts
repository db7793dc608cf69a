/**
 * What it costs that the laws of counts are fitted to the run itself: simulated pairs of sites whose counts are pooled over the run, fitted by
 * a Poisson mixture, and read with a threshold and without.
 */
import { analyseTime, type TimeResult } from "@/lib/science/correlators/analyse-time";
import { packSpins } from "@/lib/science/correlators/packed-spins";
import { drawReadoutReplicates, exactReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import { planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { countHistograms } from "@/lib/science/detection/histogram";
import { mixtureErrorRates } from "@/lib/science/detection/mixture-error-rates";
import { fitPoissonMixture, type TwoComponents } from "@/lib/science/detection/poisson-mixture";
import { advisePoissonThreshold } from "@/lib/science/detection/threshold";
import { createRandomStream, type RandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawPoisson } from "@/lib/science/stats/random-variates";
import { analyseTimeSoftly } from "@/lib/science/threshold-free/analyse-time-softly";
import { poissonCountLaw } from "@/lib/science/threshold-free/count-laws";
import { drawLawReplicates, fittedMeanErrors } from "@/lib/science/threshold-free/law-replicates";
import { softenCounts } from "@/lib/science/threshold-free/soft-spins";
import { softWeights } from "@/lib/science/threshold-free/soft-weights";

/** What is simulated in one row of the table; ⟨σ⟩ = 0. */
interface FittedLawCase {
  dark: number;
  bright: number;
  /** Share of dark shots that turn bright at a random moment of the window: the fitted laws do not know of it. */
  leakage: number;
  correlator: number;
  shots: number;
  /** Shots of all evolution times together, to which the laws are fitted. */
  pooledShots: number;
}

interface Performance {
  bias: number;
  rms: number;
  coverage: number;
}

export interface FittedLawRow extends FittedLawCase {
  /** Readings with a threshold, corrected, the uncertainty of the error rates carried in. */
  threshold: Performance;
  /** Soft spins under laws taken as exact, and with the uncertainty of the laws carried in. */
  softExact: Performance;
  soft: Performance;
  /** Share of the repeats in which both sites showed two components. */
  fitted: number;
}

const REPLICATES = 400;
const RATES = [[1, 8], [3, 9], [3, 8]] as const;
const CASES: readonly FittedLawCase[] = RATES.flatMap(([dark, bright]) =>
  [
    { leakage: 0, pooledShots: 1000 },
    { leakage: 0, pooledShots: 20000 },
    { leakage: 0.03, pooledShots: 20000 },
  ].map((rest) => ({ dark, bright, correlator: 0.4, shots: 1000, ...rest })),
);
/** Rows of this table have streams of their own, apart from the other table's. */
const FIRST_INDEX = 1000;

/** Returns the study's rows, the same for the same seed and repeats. `cases` are simulated, all of the table's without. */
export function fittedLawStudy(seed: number, repeats: number, cases: readonly FittedLawCase[] = CASES): FittedLawRow[] {
  return cases.map((row, index) => {
    const found = { threshold: new Array<TimeResult>(), softExact: new Array<TimeResult>(), soft: new Array<TimeResult>() };
    for (let repeat = 0; repeat < repeats; repeat++) {
      const counts = drawCounts(row, createRandomStream(seed, RANDOM_PURPOSES.thresholdFreeStudy, FIRST_INDEX + index, repeat));
      const fits = countHistograms(counts, 2).map(({ frequencies }) => fitPoissonMixture(frequencies));
      const [first, second] = fits;
      if (first.kind !== "two-components" || second.kind !== "two-components") continue;
      const here = counts.subarray(0, 2 * row.shots);
      found.threshold.push(byThreshold(here, [first, second], repeat));
      found.softExact.push(bySoftSpins(here, [first, second], repeat, false));
      found.soft.push(bySoftSpins(here, [first, second], repeat, true));
    }
    const judged = (results: readonly TimeResult[]) => judge(results, row.correlator);
    return { ...row, threshold: judged(found.threshold), softExact: judged(found.softExact), soft: judged(found.soft), fitted: found.soft.length / repeats };
  });
}

/** `[shot][2]`, all shots of the run; those of the evolution time that is read come first. */
function drawCounts({ dark, bright, leakage, correlator, pooledShots }: FittedLawCase, stream: RandomStream): Uint16Array {
  const counts = new Uint16Array(2 * pooledShots);
  const draw = (isBright: boolean) => {
    if (isBright) return drawPoisson(stream, bright);
    const share = stream.nextUniform() < leakage ? stream.nextUniform() : 0;
    return drawPoisson(stream, dark + share * (bright - dark));
  };
  for (let s = 0; s < pooledShots; s++) {
    const isBright = stream.nextUniform() < 0.5;
    const agrees = stream.nextUniform() < (1 + correlator) / 2;
    counts[2 * s] = draw(isBright);
    counts[2 * s + 1] = draw(isBright === agrees);
  }
  return counts;
}

const COMMON = { timeIndex: 0, plan: planReferenceTraces({ x: Float64Array.of(0, 1), y: null }, 0), estimator: "plug-in", replicates: REPLICATES, interval: "percentile", blockLength: 1, pairErrors: "law" } as const;

function byThreshold(counts: Uint16Array, fits: readonly TwoComponents[], seed: number): TimeResult {
  const thresholds = Float64Array.from(fits, ({ dark, bright }) => advisePoissonThreshold(dark, bright));
  const rates = fits.map((fit, i) => mixtureErrorRates(fit, thresholds[i]));
  const column = (value: (rate: (typeof rates)[number]) => number) => Float64Array.from(rates, value);
  const evidence = {
    falseBrightShots: column((rate) => rate.evidence.dark.errors),
    darkShots: column((rate) => rate.evidence.dark.shots),
    falseDarkShots: column((rate) => rate.evidence.bright.errors),
    brightShots: column((rate) => rate.evidence.bright.shots),
  };
  const errors = { falseBright: column((rate) => rate.falseBright), falseDark: column((rate) => rate.falseDark) };
  const readout = { ...exactReadoutCorrection(errors, "up"), replicates: drawReadoutReplicates(evidence, "up", seed, REPLICATES) };
  return analyseTime({ ...COMMON, seed, readout, spins: packSpins(counts, counts.length / 2, 2, thresholds, "up") });
}

function bySoftSpins(counts: Uint16Array, fits: readonly TwoComponents[], seed: number, carriedIn: boolean): TimeResult {
  const sites = fits.map((fit) => {
    const law = poissonCountLaw(fit);
    const value = softWeights(law, "up")?.value;
    if (value === undefined) throw new RangeError(`Rates ${fit.dark} and ${fit.bright} cannot be told apart`);
    return { value, errors: fittedMeanErrors(fit, value, fit.darkError, fit.brightError) };
  });
  const spins = softenCounts(counts, counts.length / 2, 2, sites.map(({ value }) => value));
  const lawReplicates = carriedIn ? drawLawReplicates(sites.map(({ errors }) => errors), "up", seed, REPLICATES) : null;
  return analyseTimeSoftly({ ...COMMON, seed, spins, lawReplicates });
}

function judge(results: readonly TimeResult[], truth: number): Performance {
  let sum = 0;
  let squares = 0;
  let held = 0;
  for (const { value, low, high } of results) {
    sum += value[0] - truth;
    squares += (value[0] - truth) ** 2;
    if (low[0] <= truth && truth <= high[0]) held += 1;
  }
  return { bias: sum / results.length, rms: Math.sqrt(squares / results.length), coverage: held / results.length };
}

/** Returns the rows as a Markdown table. */
export function fittedLawTable(rows: readonly FittedLawRow[]): string {
  const head = [
    "| λ dark / bright | leakage | C | M | shots fitted | fits with two components | threshold: bias, RMS, coverage | soft, laws exact: bias, RMS, coverage | soft, laws uncertain: coverage |",
    "|---|---|---|---|---|---|---|---|---|",
  ];
  return [...head, ...rows.map(tableRow)].join("\n");
}

function tableRow({ dark, bright, leakage, correlator, shots, pooledShots, fitted, threshold, softExact, soft }: FittedLawRow): string {
  const percent = (share: number) => `${(100 * share).toFixed(1)} %`;
  const shown = ({ bias, rms, coverage }: Performance) => `${bias.toFixed(4)}, ${rms.toFixed(4)}, ${percent(coverage)}`;
  return `| ${[`${dark} / ${bright}`, percent(leakage), correlator, shots, pooledShots, percent(fitted), shown(threshold), shown(softExact), percent(soft.coverage)].join(" | ")} |`;
}
