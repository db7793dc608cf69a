const MINUS = "\u2212";

/**
 * Returns how many decimals show an error with one significant digit, two when it begins with 1; 0 for errors above
 * that, and 2 for an error that is not positive.
 */
export function decimalsFor(error: number): number {
  if (!(error > 0) || !Number.isFinite(error)) return 2;
  return Math.min(20, Math.max(0, -lastDigitOf(error)));
}

/** Returns the power of ten of the last digit that shows a positive error with one significant digit, two when it begins with 1. */
export function lastDigitOf(error: number): number {
  const rounded = Number(error.toPrecision(2));
  const exponent = Math.floor(Math.log10(rounded) + 1e-12);
  return Math.round(rounded / 10 ** (exponent - 1)) < 20 ? exponent - 1 : exponent;
}

/** Returns a number with the given decimals and a typeset minus sign. */
export function fixed(value: number, decimals: number): string {
  return value.toFixed(decimals).replace("-", MINUS);
}

/** Returns value and standard error in the trade's short form, 1.42(5). */
export function shortForm(value: number, error: number): string {
  const decimals = decimalsFor(error);
  return `${fixed(value, decimals)}(${Math.round(error * 10 ** decimals)})`;
}
