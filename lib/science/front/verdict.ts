import type { Parameter, PowerLawFront, Verdict } from "@/lib/science/front/front-result";
import type { WindowEvidence } from "@/lib/science/front/window-evidence";
import { decimalsFor, fixed, shortForm } from "@/lib/science/front/short-form";

/** The verdict on a front: the plain string, one sentence, and what it rests on. */
export interface FrontVerdict {
  verdict: Verdict;
  verdictSentence: string;
  verdictReasons: string[];
}

const INTERVAL = "95\u202f% interval";

const OPENINGS: Record<Exclude<Verdict, "no fit">, string> = {
  "faster than linear": "Faster than linear",
  "slower than linear": "Slower than linear",
  "not distinguishable from linear": "Not distinguishable from linear",
};

/**
 * The exact amplitudes |J_n(vt)|² of the nearest-neighbour chain, read with 10 % of the maximum: why β alone is weak
 * evidence either way. The numbers are those of the tests.
 */
const BETA_ALONE_REASONS = [
  "β > 1 alone is no proof of anything faster than a nearest-neighbour cone: on a finite chain the fraction-of-maximum rule bends even an exactly straight cone.",
  "For the nearest-neighbour chain, exactly, 10\u202f% of the maximum gives γ ≈ 1.39 (β ≈ 0.72) over distances 1–7 and γ ≈ 1.06 (β ≈ 0.94) over 10–40 when every maximum lies inside the window, and β ≈ 1.35 over 1–7 when the window ends at vt = 2 sites, before most maxima.",
  "The comparison with the same extraction run on the nearest-neighbour model at this run's times, sizes and shots, the null front, is a study of its own.",
];

/** Returns the verdict from the 95 % interval of γ over the full-pipeline bootstrap. */
export function verdictOf(gamma: Parameter | null): Verdict {
  if (gamma === null || gamma.low === null || gamma.high === null) return "no fit";
  if (gamma.high < 1) return "faster than linear";
  if (gamma.low > 1) return "slower than linear";
  return "not distinguishable from linear";
}

/**
 * Returns verdict, sentence and reasons of a power law, or of its absence for the reason given. "Faster than linear" is withheld when the
 * points whose traces no longer rise at the end of the window do not show it by themselves: a window that ends before far traces reach their maximum makes
 * their crossings early, and a straight cone look bent.
 */
export function judgeFront(powerLaw: PowerLawFront | null, noFitReason: string, window: WindowEvidence | null): FrontVerdict {
  const read = verdictOf(powerLaw?.gamma ?? null);
  const withheld = read === "faster than linear" && window?.gammaInside != null && verdictOf(window.gammaInside) !== read;
  const verdict = withheld ? "not distinguishable from linear" : read;
  if (powerLaw === null || verdict === "no fit") {
    const reason = powerLaw === null ? noFitReason : "Too few replicates carry a fit to give γ an interval.";
    return {
      verdict: "no fit",
      verdictSentence: `No fit: ${lowerFirst(reason)}`,
      verdictReasons: [reason, ...BETA_ALONE_REASONS],
    };
  }
  return {
    verdict,
    verdictSentence: `${OPENINGS[verdict]}${isOpen(verdict, window) ? " within this window" : ""}: ${exponentText(powerLaw)}.`,
    verdictReasons: [intervalReason(powerLaw.gamma, read), ...windowReasons(read, withheld, window), ...BETA_ALONE_REASONS],
  };
}

/** β with its interval; γ where the front is too steep for β to have a meaning. */
function exponentText({ beta, gamma }: PowerLawFront): string {
  const { value, error, low, high } = beta;
  if (value === null || value <= 0 || error === null || low === null) {
    return `γ = ${shortForm(gamma.value ?? NaN, gamma.error ?? NaN)}, ${INTERVAL} ${intervalText(gamma)}`;
  }
  const decimals = decimalsFor(error);
  const ends =
    high === null
      ? `from ${fixed(low, decimals)} without upper end`
      : `${fixed(low, decimals)} to ${fixed(high, decimals)}`;
  return `β = ${shortForm(value, error)}, ${INTERVAL} ${ends}`;
}

function intervalReason(gamma: Parameter, verdict: Verdict): string {
  const place = {
    "faster than linear": "lies below 1",
    "slower than linear": "lies above 1",
    "not distinguishable from linear": "contains 1",
    "no fit": "",
  };
  return `The ${INTERVAL} of γ = 1/β over all replicates, ${intervalText(gamma)}, ${place[verdict]}.`;
}

function intervalText({ low, high, error }: Parameter): string {
  const decimals = decimalsFor(error ?? NaN) + 1;
  return `${fixed(low ?? NaN, decimals)} to ${fixed(high ?? NaN, decimals)}`;
}

/** Whether traces that still rise leave open what a longer window would show. */
function isOpen(verdict: Verdict, window: WindowEvidence | null): boolean {
  return verdict === "faster than linear" && window !== null && window.inside < window.points && window.gammaInside === null;
}

function windowReasons(read: Verdict, withheld: boolean, window: WindowEvidence | null): string[] {
  if (window === null || read !== "faster than linear" || window.inside === window.points) return [];
  const { points, inside, gammaInside } = window;
  const opening = `${inside} of ${points} fitted traces no longer rise where the window ends; the others do, which makes their level too low and their crossing too early`;
  if (withheld && gammaInside) return [`${opening}. Those that do not alone give γ from ${intervalText(gammaInside)}, which contains 1, so nothing faster than linear is claimed; measure longer.`];
  if (gammaInside) return [`${opening}. Those that do not alone give γ from ${intervalText(gammaInside)}, below 1 as well.`];
  return [`${opening}. Too few are left to judge by themselves: measure longer before claiming it.`];
}

function lowerFirst(sentence: string): string {
  return sentence.charAt(0).toLowerCase() + sentence.slice(1);
}
