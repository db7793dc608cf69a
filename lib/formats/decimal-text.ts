const DECIMAL = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,4})?$/;
const DECIMAL_COMMA = /^[+-]?\d*,\d+(?:[eE][+-]?\d+)?$/;

/** Decimal digits that every binary64 number keeps (IEEE 754); those beyond are traces of a writer's own arithmetic. */
const SURE_DIGITS = 15;

/**
 * Returns the number that a decimal text states, times `10 ** tens`, or null when it is no finite decimal number. The
 * decimal point is shifted in the text, of which 15 digits count when `tens` is not 0: 0.049565 with `tens` 3 is exactly
 * the number written 49.565, and so is 0.049565000000000004.
 */
export function decimalNumber(text: string, tens = 0): number | null {
  if (!DECIMAL.test(text)) return null;
  const value = tens === 0 ? Number(text) : shifted(Number(text), tens);
  return Number.isFinite(value) ? value + 0 : null;
}

function shifted(value: number, tens: number): number {
  const [digits, exponent] = value.toExponential(SURE_DIGITS - 1).split("e");
  return Number(`${digits}e${Number(exponent) + tens}`);
}

/** Returns why a text is not taken as a number, with advice where there is some. */
export function whyNotANumber(text: string): string {
  if (text === "") return "empty, a number is needed";
  const shown = text.length > 40 ? `${text.slice(0, 40)}…` : text;
  if (DECIMAL_COMMA.test(text)) return `${shown} has a decimal comma; write decimals with a point, as in ${shown.replace(",", ".")}`;
  return `"${shown}" is not a number`;
}
