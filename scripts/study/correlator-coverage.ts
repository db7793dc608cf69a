/** Coverage of the 95 % intervals of single correlators, by how few shots the rarest joint outcome has. */
import { analyseTime, type TimeTask } from "@/lib/science/correlators/analyse-time";
import type { IntervalKind } from "@/lib/science/correlators/error-bars";
import { wordsPerSite, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import { pairIndex } from "@/lib/science/correlators/pairs";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { addRepeat, coverageText, emptyTally, mergeTallies, percent, type CoverageTally } from "@/scripts/study/coverage-tally";

/** What is simulated in one row: two sites of equal mean. */
export interface CorrelatorCell {
  mean: number;
  correlator: number;
  shots: number;
}

/** What was found; `fewFlips` counts the intervals marked so. */
export interface CorrelatorTally {
  kinds: Record<IntervalKind, CoverageTally>;
  /** Of the percentile intervals that carry no mark. */
  unmarked: CoverageTally;
  pairs: number;
  fewFlips: number;
}

const SHOTS = [250, 1000, 4000];
const PAIRS: readonly { mean: number; correlator: number }[] = [
  { mean: 0, correlator: 0 },
  { mean: 0, correlator: 0.4 },
  { mean: -0.6, correlator: 0.2 },
  { mean: -0.8, correlator: 0 },
  { mean: -0.9, correlator: 0.05 },
  { mean: -0.96, correlator: 0.02 },
];
/** Independent pairs that share a simulated run and its resamples. */
const PAIRS_A_RUN = 8;
const REPLICATES = 1000;
const NO_TRACES: TracePlan = { kind: "distance", labels: [], distances: new Float64Array(0), offsets: Uint32Array.of(0), pairs: new Uint32Array(0) };
const KINDS: readonly IntervalKind[] = ["percentile", "basic", "bca"];

/** The rows of the study. */
export const CORRELATOR_CELLS: readonly CorrelatorCell[] = SHOTS.flatMap((shots) => PAIRS.map((pair) => ({ ...pair, shots })));

/** Chances of ++, +−, −+ and −−. */
function sharesOf({ mean, correlator }: CorrelatorCell): number[] {
  const share = (i: number, j: number) => ((1 + i * mean) * (1 + j * mean) + i * j * correlator) / 4;
  return [share(1, 1), share(1, -1), share(-1, 1), share(-1, -1)];
}

/** Returns the tally of simulated runs number `first` … `first + count − 1` of a row, the same whichever thread runs it. */
export function correlatorCoverage(cell: CorrelatorCell, index: number, seed: number, first: number, count: number): CorrelatorTally {
  const tally = emptyCorrelatorTally();
  for (let run = first; run < first + count; run++) addRun(tally, cell, index, seed, run);
  return tally;
}

function emptyCorrelatorTally(): CorrelatorTally {
  return { kinds: { percentile: emptyTally(), basic: emptyTally(), bca: emptyTally() }, unmarked: emptyTally(), pairs: 0, fewFlips: 0 };
}

function addRun(tally: CorrelatorTally, cell: CorrelatorCell, index: number, seed: number, run: number): void {
  const stream = createRandomStream(seed, RANDOM_PURPOSES.coverageStudy, index, run);
  const task: Omit<TimeTask, "interval"> = {
    timeIndex: 0,
    spins: drawPairs(cell, stream.nextUniform),
    estimator: "plug-in",
    readout: null,
    plan: NO_TRACES,
    replicates: REPLICATES,
    seed: stream.nextUint32(),
    blockLength: 1,
    pairErrors: "law",
  };
  const sites = 2 * PAIRS_A_RUN;
  for (const kind of KINDS) {
    const { value, error, low, high, fewFlips } = analyseTime({ ...task, interval: kind });
    for (let n = 0; n < PAIRS_A_RUN; n++) {
      const at = pairIndex(sites, 2 * n, 2 * n + 1);
      const held = [{ estimate: { value: value[at], error: error[at], low: low[at], high: high[at] }, truth: cell.correlator }];
      addRepeat(tally.kinds[kind], held);
      if (kind !== "percentile") continue;
      tally.pairs += 1;
      tally.fewFlips += fewFlips[at];
      if (fewFlips[at] === 0) addRepeat(tally.unmarked, held);
    }
  }
}

function drawPairs(cell: CorrelatorCell, uniform: () => number): PackedSpins {
  const { shots } = cell;
  const [both, onlyI, onlyJ] = sharesOf(cell);
  const stride = wordsPerSite(shots);
  const words = new Uint32Array(2 * PAIRS_A_RUN * stride);
  for (let n = 0; n < PAIRS_A_RUN; n++) {
    for (let s = 0; s < shots; s++) {
      const u = uniform();
      const bit = 1 << (s & 31);
      if (u < both + onlyI) words[2 * n * stride + (s >>> 5)] |= bit;
      if (u < both || (u >= both + onlyI && u < both + onlyI + onlyJ)) words[(2 * n + 1) * stride + (s >>> 5)] |= bit;
    }
  }
  return { sites: 2 * PAIRS_A_RUN, shots, words };
}

/** Returns the sum of two tallies of one row. */
export function mergeCorrelatorTallies(first: CorrelatorTally, second: CorrelatorTally): CorrelatorTally {
  const kind = (name: IntervalKind) => mergeTallies(first.kinds[name], second.kinds[name]);
  return {
    kinds: { percentile: kind("percentile"), basic: kind("basic"), bca: kind("bca") },
    unmarked: mergeTallies(first.unmarked, second.unmarked),
    pairs: first.pairs + second.pairs,
    fewFlips: first.fewFlips + second.fewFlips,
  };
}

/** Returns the rows as a Markdown table. */
export function correlatorTable(tallies: readonly CorrelatorTally[]): string {
  const rows = CORRELATOR_CELLS.map((cell, at) => {
    const { kinds, unmarked, pairs, fewFlips } = tallies[at];
    const rarest = Math.min(...sharesOf(cell)) * cell.shots;
    const cells = [cell.shots, cell.mean, cell.correlator, rarest.toFixed(1), ...KINDS.map((kind) => coverageText(kinds[kind])), percent(fewFlips / pairs), coverageText(unmarked)];
    return `| ${cells.join(" | ")} |`;
  });
  return [
    "| M | ⟨σ⟩ | C | rarest outcome, shots | percentile | basic | BCa | marked few-flips, % | percentile without the mark |",
    "|---|---|---|---|---|---|---|---|---|",
    ...rows,
  ].join("\n");
}
