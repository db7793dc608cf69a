import { extent, ticks } from "d3";

export interface GammaBin {
  from: number;
  to: number;
  count: number;
}

/** Bins wanted over the repeats' own span; the step is a round number. */
const WANTED_BINS = 24;
/** Repeats closer together than this agree, and make one bin of this width. */
const LONE_WIDTH = 1e-3;

/** Returns the histogram of the repeats' γ and the span to draw, which holds the observed γ too. */
export function gammaBins(gammas: readonly (number | null)[], observed: number | null): { bins: GammaBin[]; domain: [number, number] } {
  const numbers = gammas.filter((gamma) => gamma !== null);
  const [least, most] = extent(numbers);
  if (least === undefined || most === undefined) return { bins: [], domain: [0, 1] };
  const edges = edgesOver(least, most);
  const bins = edges.slice(1).map((to, at): GammaBin => ({ from: edges[at], to, count: 0 }));
  for (const gamma of numbers) bins[Math.max(0, bins.findLastIndex(({ from }) => from <= gamma))].count += 1;
  const ends = [edges[0], edges[edges.length - 1], ...(observed === null ? [] : [observed])];
  const [low, high] = [Math.min(...ends), Math.max(...ends)];
  const margin = 0.04 * (high - low);
  return { bins, domain: [low - margin, high + margin] };
}

/** Round edges that enclose the span. */
function edgesOver(least: number, most: number): number[] {
  if (most - least < LONE_WIDTH) return [least - LONE_WIDTH / 2, least + LONE_WIDTH];
  const inner = ticks(least, most, WANTED_BINS);
  const step = inner[1] - inner[0];
  return [inner[0] - step, ...inner, inner[inner.length - 1] + step];
}
