import type { AnalysisParameters } from "@/db/schema/analyses";
import type { DetectionSite } from "@/db/schema/detections";
import { exactReadoutCorrection, drawReadoutReplicates, sitesBeyondCorrection, sitesPoorlyKnown, type ReadoutCorrection, type ReadoutErrors, type ReadoutEvidence } from "@/lib/science/correlators/readout-correction";
import { planDistanceTraces, planReferenceTraces, type TracePlan } from "@/lib/science/correlators/trace-plan";
import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import { invalidAt, problem, type Problem } from "@/lib/problem";
import { positionColumns } from "./analysis-positions";

/** All pairs are counted at once in a thread's memory; twice the largest arrays there are. */
const MOST_SITES = 512;
const FEWEST_BLOCKS = 8;
/** Joint replicates of all traces are held at once for the front. */
const MOST_REPLICATE_BYTES = 1.5 * 1024 ** 3;

/** Returns which pairs make which trace, or what is wrong with the wish. */
export function planTraces(traces: AnalysisParameters["traces"], positions: number[][]): TracePlan | Problem {
  const sites = positions.length;
  if (traces.kind === "reference") {
    if (traces.site >= sites) return invalidAt("traces.site", `the run has sites 0 to ${sites - 1}`);
    return planReferenceTraces(positionColumns(positions), traces.site);
  }
  const outside = traces.bulk?.find((site) => site >= sites);
  if (outside !== undefined) return invalidAt("traces.bulk", `there is no site ${outside}; the run has sites 0 to ${sites - 1}`);
  if (traces.bulk && new Set(traces.bulk).size < 2) return invalidAt("traces.bulk", "needs at least two different sites");
  return planDistanceTraces(positionColumns(positions), traces.bulk);
}

/** Returns a Problem when a run has too few sites for a correlator, or too many for all pairs. */
export function sitesProblem(sites: number): Problem | null {
  if (sites < 2) return invalidAt("sites", "a correlator needs at least two sites");
  return sites > MOST_SITES ? invalidAt("sites", `all pairs of ${sites} sites are too many; an analysis takes at most ${MOST_SITES}`) : null;
}

/** Returns a Problem when a time has too few shots to resample blocks of them: a few blocks tell nothing of their spread. */
export function blockLengthProblem(blockLength: number, shotsPerTime: number[]): Problem | null {
  const longest = Math.max(1, Math.floor(Math.min(...shotsPerTime) / FEWEST_BLOCKS));
  if (blockLength <= longest) return null;
  return invalidAt("bootstrap.blockLength", `the time with the fewest shots would have under ${FEWEST_BLOCKS} blocks; at most ${longest} shots in a row can be resampled together`);
}

/** Returns a Problem when the joint replicates would not fit into memory. */
export function replicatesProblem(plan: TracePlan, times: number, replicates: number): Problem | null {
  const bytes = 8 * plan.distances.length * times * replicates;
  if (bytes <= MOST_REPLICATE_BYTES) return null;
  const fitting = Math.floor(MOST_REPLICATE_BYTES / (8 * plan.distances.length * times));
  return invalidAt("bootstrap.replicates", `${plan.distances.length} traces at ${times} times need ${(bytes / 1024 ** 3).toFixed(1)} GiB of replicates; at most ${fitting} fit`);
}

/** Returns the readout correction of a detection with its replicates drawn, or why there can be none. */
export function readoutOf(sites: DetectionSite[], brightIs: BrightIs, seed: number, replicates: number): ReadoutCorrection | Problem {
  const unknown = sites.filter(({ falseBright, falseDark }) => falseBright === null || falseDark === null).map(({ site }) => site);
  if (unknown.length > 0) {
    return problem("invalid-input", `The detection knows no error rates at site ${unknown.join(", ")}; correct with one made from calibration shots, or do not correct.`, [
      { where: "readoutCorrection", message: `no error rates at site ${unknown.join(", ")}` },
    ]);
  }
  const errors: ReadoutErrors = {
    falseBright: Float64Array.from(sites, ({ falseBright }) => falseBright ?? Number.NaN),
    falseDark: Float64Array.from(sites, ({ falseDark }) => falseDark ?? Number.NaN),
  };
  const beyond = sitesBeyondCorrection(errors);
  if (beyond.length > 0) return invalidAt("readoutCorrection", `F = 1 − ε_d − ε_b is not above 0.2 at site ${beyond.join(", ")}; dividing by it would turn noise into a result`);
  const exact = exactReadoutCorrection(errors, brightIs);
  const evidence = evidenceOf(sites);
  if (!evidence) return exact;
  const drawn = drawReadoutReplicates(evidence, brightIs, seed, replicates);
  const poor = sitesPoorlyKnown(drawn);
  if (poor.length === 0) return { ...exact, replicates: drawn };
  return invalidAt("readoutCorrection", `the error rates at site ${poor.join(", ")} are too poorly known: within their uncertainty 1 − ε_d − ε_b reaches 0.1; take more calibration shots`);
}

/** The counts behind the ε's; null when a site has none, and then the ε's are taken as exact. */
function evidenceOf(sites: DetectionSite[]): ReadoutEvidence | null {
  const tallies = sites.map(({ evidence }) => evidence);
  if (!tallies.every((tally) => tally !== null)) return null;
  return {
    falseBrightShots: Float64Array.from(tallies, ({ dark }) => dark.errors),
    darkShots: Float64Array.from(tallies, ({ dark }) => dark.shots),
    falseDarkShots: Float64Array.from(tallies, ({ bright }) => bright.errors),
    brightShots: Float64Array.from(tallies, ({ bright }) => bright.shots),
  };
}
