import { interpolateLab, rgb } from "d3";
import type { ThemeName } from "@/components/shell/theme-choice";

/** Ends of equal CIELAB lightness either side of the ground, so that equal |C| looks equally far from zero. */
const ANCHORS: Record<ThemeName, { negative: string[]; zero: string; positive: string[] }> = {
  paper: { negative: ["#12356f", "#5f8fc4"], zero: "#f8f3e7", positive: ["#d99145", "#7a3600"] },
  night: { negative: ["#a9d0ff", "#3f74b8"], zero: "#141d31", positive: ["#b56a1c", "#ffc98a"] },
};

const STEPS = 255;
const tables: Record<ThemeName, string[]> = { paper: buildTable("paper"), night: buildTable("night") };

/** Returns a CSS colour for `value` on a scale from −limit to +limit, or null where there is no number. */
export function divergingColour(theme: ThemeName, value: number | null | undefined, limit: number): string | null {
  if (value === null || value === undefined || Number.isNaN(value)) return null;
  const clamped = Math.max(-1, Math.min(1, value / limit));
  return tables[theme][Math.round((clamped + 1) * STEPS)];
}

/** 2·255 + 1 steps from −1 to +1. */
function buildTable(theme: ThemeName): string[] {
  const { negative, zero, positive } = ANCHORS[theme];
  return Array.from({ length: 2 * STEPS + 1 }, (_, step) => {
    const x = step / STEPS - 1;
    return rgb(x < 0 ? between(zero, negative[1], negative[0], -x) : between(zero, positive[0], positive[1], x)).formatHex();
  });
}

/** Lab blend from `from` over `middle` (at one half) to `to`. */
function between(from: string, middle: string, to: string, x: number): string {
  return x < 0.5 ? interpolateLab(from, middle)(2 * x) : interpolateLab(middle, to)(2 * x - 1);
}
