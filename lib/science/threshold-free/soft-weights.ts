import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import { LEAST_READOUT_FACTOR } from "@/lib/science/correlators/readout-correction";
import type { CountLaw } from "@/lib/science/threshold-free/count-laws";

/** What a count says of a spin, without a threshold. */
export interface SoftWeights {
  /** `[bin]`, the soft spin of a count; see `CountLaw` for the bins. Averages to the spin over either component. */
  value: Float64Array;
  /**
   * Of the information on the share of bright shots that perfect readout would give at even chances, the part the counts keep,
   * 0 … 1: ¼ Σ (p_b − p_d)²/(½ p_b + ½ p_d). After a threshold it would be F², for ε_d = ε_b.
   */
  retained: number;
}

/** A site that keeps less is refused, as one with F ≤ 0.2 is: its soft spins would be noise. */
const LEAST_RETAINED = LEAST_READOUT_FACTOR * LEAST_READOUT_FACTOR;

/** A prior outside is moved to the edge: the weights of a component never seen would be unbounded. */
const LEAST_SHARE = 0.02;

/**
 * Returns the soft spins of a site's counts: of all functions f(n) with mean +1 over one component and −1 over the other the one of
 * least variance at the given share of bright shots. With m = π p_b + (1 − π) p_d that is f = (a p_b + b p_d)/m, where a and b
 * solve the two mean conditions: least-squares unmixing with optimal event weights (Barlow 1987; Pivk and Le Diberder 2005).
 * Null where the site keeps no more than 4 % of the information, or is no law.
 */
export function softWeights(law: CountLaw, brightIs: BrightIs): SoftWeights | null {
  const retained = keptAtEvenChances(law);
  if (!(retained > LEAST_RETAINED)) return null;
  const share = Math.min(1 - LEAST_SHARE, Math.max(LEAST_SHARE, law.brightWeight));
  const { bright, dark } = law;
  const mixed = bright.map((p, n) => share * p + (1 - share) * dark[n]);
  const product = (first: Float64Array, second: Float64Array) =>
    first.reduce((sum, p, n) => (mixed[n] > 0 ? sum + (p / mixed[n]) * second[n] : sum), 0);
  const brightBright = product(bright, bright);
  const brightDark = product(bright, dark);
  const darkDark = product(dark, dark);
  const sign = brightIs === "up" ? 1 : -1;
  const determinant = brightBright * darkDark - brightDark * brightDark;
  const a = (sign * (darkDark + brightDark)) / determinant;
  const b = (-sign * (brightBright + brightDark)) / determinant;
  // A count that neither component gives says nothing.
  const value = mixed.map((m, n) => (m > 0 ? (a * bright[n] + b * dark[n]) / m : 0));
  return { value, retained };
}

function keptAtEvenChances({ dark, bright }: CountLaw): number {
  let kept = 0;
  for (let n = 0; n < bright.length; n++) {
    const both = bright[n] + dark[n];
    if (both > 0) kept += ((bright[n] - dark[n]) / both) * (bright[n] - dark[n]);
  }
  return Math.min(1, kept / 2);
}
