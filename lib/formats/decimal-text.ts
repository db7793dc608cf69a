const DECIMAL = /^([+-]?(?:\d+\.?\d*|\.\d+))(?:[eE]([+-]?\d{1,4}))?$/;
const DECIMAL_COMMA = /^[+-]?\d*,\d+(?:[eE][+-]?\d+)?$/;

/**
 * Returns the number that a decimal text states, times `10 ** tens`, or null when it is no finite decimal number. The
 * power of ten is applied to the text, so 0.049565 with `tens` 3 is exactly the number written 49.565.
 */
export function decimalNumber(text: string, tens = 0): number | null {
  const parts = DECIMAL.exec(text);
  if (parts === null) return null;
  const value = Number(`${parts[1]}e${Number(parts[2] ?? 0) + tens}`);
  return Number.isFinite(value) ? value + 0 : null;
}

/** Returns why a text is not taken as a number, with advice where there is some. */
export function whyNotANumber(text: string): string {
  if (text === "") return "empty, a number is needed";
  const shown = text.length > 40 ? `${text.slice(0, 40)}…` : text;
  if (DECIMAL_COMMA.test(text)) return `${shown} has a decimal comma; write decimals with a point, as in ${shown.replace(",", ".")}`;
  return `"${shown}" is not a number`;
}
