import { hcl, interpolateLab, rgb, type HCLColor } from "d3";

/** What the map lies on: the page's paper, the night, or the white of a printed figure. Zero is always the ground. */
export type MapGround = "paper" | "night" | "white";

/**
 * CIELAB hue, chroma and lightness of the half-way and end colours: lightness is the same either side and falls (night:
 * rises) in equal steps from the ground, so that equal |C| looks equally far from zero, also in grey print.
 */
const DARK_INK = { negative: [hcl(262, 38, 62), hcl(275, 46, 28)], positive: [hcl(66, 58, 62), hcl(52, 50, 28)] };
const ANCHORS: Record<MapGround, { zero: string; negative: HCLColor[]; positive: HCLColor[] }> = {
  paper: { zero: "#f8f3e7", ...DARK_INK },
  white: { zero: "#ffffff", ...DARK_INK },
  night: { zero: "#101829", negative: [hcl(268, 46, 46), hcl(255, 28, 84)], positive: [hcl(62, 56, 46), hcl(76, 44, 84)] },
};

const STEPS = 255;
const tables: Record<MapGround, string[]> = { paper: buildTable("paper"), night: buildTable("night"), white: buildTable("white") };

/** Returns a CSS colour for `value` on a scale from −limit to +limit, or null where there is no number. */
export function divergingColour(ground: MapGround, value: number | null | undefined, limit: number): string | null {
  if (value === null || value === undefined || Number.isNaN(value)) return null;
  const clamped = Math.max(-1, Math.min(1, value / limit));
  return tables[ground][Math.round((clamped + 1) * STEPS)];
}

/** 2·255 + 1 steps from −1 to +1. */
function buildTable(ground: MapGround): string[] {
  const { negative, zero, positive } = ANCHORS[ground];
  return Array.from({ length: 2 * STEPS + 1 }, (_, step) => {
    const x = step / STEPS - 1;
    return rgb(x < 0 ? between(zero, negative[0], negative[1], -x) : between(zero, positive[0], positive[1], x)).formatHex();
  });
}

/** Lab blend from `from` over `middle` (at one half) to `to`. */
function between(from: string, middle: HCLColor, to: HCLColor, x: number): string {
  return x < 0.5 ? interpolateLab(from, middle)(2 * x) : interpolateLab(middle, to)(2 * x - 1);
}
