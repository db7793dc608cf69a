import type { AnalysisParameters } from "@/db/schema/analyses";
import type { DetectionSite } from "@/db/schema/detections";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";
import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import { sitesPoorlyKnown, type ReadoutCorrection, type ReadoutReplicates } from "@/lib/science/correlators/readout-correction";
import { fittedCountLaw } from "@/lib/science/threshold-free/count-laws";
import { drawLawReplicates, fittedMeanErrors, type SoftMeanErrors } from "@/lib/science/threshold-free/law-replicates";
import { softWeights } from "@/lib/science/threshold-free/soft-weights";
import { readoutOf } from "./plan-analysis";

/** How counts become spins: above a threshold with its readout correction, or as soft weights of the fitted count distributions. */
export type Reading =
  | { kind: "threshold"; thresholds: Float64Array; readout: ReadoutCorrection | null }
  | { kind: "threshold-free"; weights: Float64Array[]; lawReplicates: ReadoutReplicates | null };

interface ReadingInput {
  parameters: Pick<AnalysisParameters, "reading" | "readoutCorrection">;
  sites: DetectionSite[];
  countType: "uint16" | "float32";
  brightIs: BrightIs;
  seed: number;
  replicates: number;
}

/** Returns how the counts of an analysis are read, with the readout's replicates drawn, or why they cannot be read so. */
export function planReading(input: ReadingInput): Reading | Problem {
  const { parameters, sites, brightIs, seed, replicates } = input;
  if (parameters.reading === "threshold-free") return softReading(input);
  const readout = parameters.readoutCorrection ? readoutOf(sites, brightIs, seed, replicates) : null;
  if (isProblem(readout)) return readout;
  return { kind: "threshold", thresholds: Float64Array.from(sites, ({ threshold }) => threshold), readout };
}

function softReading({ parameters, sites, countType, brightIs, seed, replicates }: ReadingInput): Reading | Problem {
  if (parameters.readoutCorrection) return invalidAt("readoutCorrection", "without a threshold there are no readout errors left to correct");
  if (countType !== "uint16") return invalidAt("reading", "needs whole counts; this run's are fractional");
  const read = sites.map((site) => readSoftly(site, brightIs));
  const missing = sites.filter((_, i) => read[i] === null).map(({ site }) => site);
  if (missing.length > 0) {
    return invalidAt("reading", `no two count distributions that can be told apart are known at site ${missing.join(", ")}; choose a detection made from a mixture, or thresholds`);
  }
  const found = read.filter((site) => site !== null);
  const errors = found.map((site) => site.errors).filter((error) => error !== null);
  // Detections from before the rates' errors were kept: their laws are taken as exact.
  const lawReplicates = errors.length === found.length ? drawLawReplicates(errors, brightIs, seed, replicates) : null;
  const poor = lawReplicates === null ? [] : sitesPoorlyKnown(lawReplicates);
  if (poor.length > 0) return invalidAt("reading", `the count distributions at site ${poor.join(", ")} are too poorly known: fitted to more shots they may be told apart`);
  return { kind: "threshold-free", weights: found.map(({ weights }) => weights), lawReplicates };
}

/** A site's soft weights, and how well their law is known; null where it has no two components that can be told apart. */
function readSoftly({ mixture }: DetectionSite, brightIs: BrightIs): { weights: Float64Array; errors: SoftMeanErrors | null } | null {
  if (mixture === null) return null;
  const law = fittedCountLaw(mixture);
  const soft = softWeights(law, brightIs);
  if (soft === null) return null;
  const { darkError, brightError } = mixture;
  const isKnown = darkError !== undefined && brightError !== undefined;
  return { weights: soft.value, errors: isKnown ? fittedMeanErrors(mixture, soft.value, darkError, brightError) : null };
}
