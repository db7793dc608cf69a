import { lastDigitOf } from "@/lib/science/front/short-form";

const MINUS = "\u2212";
/** Below this, numbers are written in powers of ten. */
const SMALLEST_PLAIN = 1e-3;
const SUPERSCRIPTS = "⁰¹²³⁴⁵⁶⁷⁸⁹";

/** Returns a number with a typeset minus sign, with `digits` significant digits, small ones in powers of ten; "–" for null or NaN. */
export function plainNumber(value: number | null | undefined, digits = 4): string {
  if (value === null || value === undefined || Number.isNaN(value)) return "–";
  if (!Number.isFinite(value)) return value > 0 ? "∞" : `${MINUS}∞`;
  if (value !== 0 && Math.abs(value) < SMALLEST_PLAIN) {
    const power = Math.floor(Math.log10(Math.abs(value)));
    return timesPowerOfTen(String(Number((value / 10 ** power).toPrecision(digits))).replace("-", MINUS), power);
  }
  return String(Number(value.toPrecision(digits))).replace("-", MINUS);
}

/** Returns a number with a fixed count of decimals and a typeset minus sign; "–" for null or NaN. */
export function fixedNumber(value: number | null | undefined, decimals: number): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return "–";
  const text = value.toFixed(decimals);
  return (Number(text) === 0 ? text.replace("-", "") : text).replace("-", MINUS);
}

/**
 * Returns value and standard error in the trade's short form, 1.42(5): the error with one significant digit, two when
 * it begins with 1, in units of the last digit shown. Without a usable error: the plain number.
 */
export function withUncertainty(value: number | null | undefined, error: number | null | undefined): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return "–";
  if (error === null || error === undefined || !Number.isFinite(error) || error <= 0) return plainNumber(value);
  const exponent = lastDigitOf(error);
  const digits = Math.round(error / 10 ** exponent);
  if (Math.max(Math.abs(value), error) < SMALLEST_PLAIN) return inPowersOfTen(value, error);
  if (exponent > 0) {
    const scale = 10 ** exponent;
    return `${fixedNumber(Math.round(value / scale) * scale, 0)}(${digits * scale})`;
  }
  return `${fixedNumber(value, -exponent)}(${digits})`;
}

/** Returns value, standard error and interval in full, for hover titles: "1.4231 ± 0.0521 (95 %: 1.33 … 1.53)". */
export function longForm(
  value: number | null | undefined,
  error?: number | null,
  low?: number | null,
  high?: number | null,
): string {
  const base = plainNumber(value, 6);
  const spread = error === null || error === undefined ? "" : ` ± ${plainNumber(error, 3)}`;
  const hasInterval = low !== undefined && high !== undefined && !(low === null && high === null);
  return hasInterval ? `${base}${spread} (95 %: ${plainNumber(low, 4)} … ${high === null ? "∞" : plainNumber(high, 4)})` : `${base}${spread}`;
}

/** Returns a count with thin spaces between groups of three digits: 12 000. */
export function groupedCount(value: number): string {
  return String(Math.round(value)).replace(/\B(?=(\d{3})+(?!\d))/g, "\u202f").replace("-", MINUS);
}

/** Returns a size in bytes for people: 1.4 MB (powers of ten). */
export function byteCount(bytes: number): string {
  const units = ["B", "kB", "MB", "GB", "TB"];
  const step = bytes > 0 ? Math.min(units.length - 1, Math.floor(Math.log10(bytes) / 3)) : 0;
  return `${plainNumber(bytes / 1000 ** step, 3)}\u00a0${units[step]}`;
}

function inPowersOfTen(value: number, error: number): string {
  const power = Math.floor(Math.log10(Math.max(Math.abs(value), error)));
  return timesPowerOfTen(withUncertainty(value / 10 ** power, error / 10 ** power), power);
}

function timesPowerOfTen(digits: string, power: number): string {
  const raised = [...String(Math.abs(power))].map((digit) => SUPERSCRIPTS[Number(digit)]).join("");
  return `${digits}\u202f×\u202f10${power < 0 ? "⁻" : ""}${raised}`;
}
