import { interpolateLab, rgb } from "d3";
import type { ThemeName } from "@/components/shell/theme-choice";

/** Ends of equal CIELAB lightness either side of the ground, so that equal |C| looks equally far from zero. */
const ANCHORS: Record<ThemeName, { negative: string[]; zero: string; positive: string[] }> = {
  paper: { negative: ["#12356f", "#5f8fc4"], zero: "#f8f3e7", positive: ["#d99145", "#7a3600"] },
  night: { negative: ["#a9d0ff", "#3f74b8"], zero: "#141d31", positive: ["#b56a1c", "#ffc98a"] },
};

const STEPS = 255;
const tables = new Map<ThemeName, Uint8ClampedArray>();

/** Returns the colour table `[step][r, g, b]` of 2·255 + 1 steps from −1 to +1; zero is the ground. */
export function divergingTable(theme: ThemeName): Uint8ClampedArray {
  const known = tables.get(theme);
  if (known) return known;
  const table = buildTable(theme);
  tables.set(theme, table);
  return table;
}

/** Returns the row of the colour table for `value` on a scale from −limit to +limit; NaN gives −1. */
export function divergingStep(value: number, limit: number): number {
  if (Number.isNaN(value)) return -1;
  const clamped = Math.max(-1, Math.min(1, value / limit));
  return Math.round((clamped + 1) * STEPS);
}

/** Returns a CSS colour for `value` on a scale from −limit to +limit; NaN is transparent. */
export function divergingColour(theme: ThemeName, value: number, limit: number): string {
  const step = divergingStep(value, limit);
  if (step < 0) return "transparent";
  const table = divergingTable(theme);
  return rgb(table[3 * step], table[3 * step + 1], table[3 * step + 2]).formatHex();
}

function buildTable(theme: ThemeName): Uint8ClampedArray {
  const { negative, zero, positive } = ANCHORS[theme];
  const table = new Uint8ClampedArray(3 * (2 * STEPS + 1));
  for (let step = 0; step <= 2 * STEPS; step++) {
    const x = step / STEPS - 1;
    const colour = rgb(x < 0 ? between(zero, negative[1], negative[0], -x) : between(zero, positive[0], positive[1], x));
    table.set([colour.r, colour.g, colour.b], 3 * step);
  }
  return table;
}

/** Lab blend from `from` over `middle` (at one half) to `to`. */
function between(from: string, middle: string, to: string, x: number): string {
  return x < 0.5 ? interpolateLab(from, middle)(2 * x) : interpolateLab(middle, to)(2 * x - 1);
}
