import { quantileSorted } from "@/lib/science/stats/quantiles";
import type { SpreadOfRepeats } from "@/lib/science/studies/null-front-result";

/** Returns the 2.5, 25, 50, 75 and 97.5 % quantiles (type 7) of the numbers among `values`. */
export function spreadOf(values: readonly (number | null)[]): SpreadOfRepeats {
  const numbers = numbersAmong(values).sort();
  const at = (p: number) => (numbers.length === 0 ? null : quantileSorted(numbers, p));
  return { low: at(0.025), lowerQuarter: at(0.25), median: at(0.5), upperQuarter: at(0.75), high: at(0.975) };
}

/** Returns the values that are not null, in order. */
export function numbersAmong(values: readonly (number | null)[]): Float64Array {
  return Float64Array.from(values.filter((value) => value !== null));
}
