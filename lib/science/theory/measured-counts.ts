import type { RandomStream } from "@/lib/science/stats/philox";
import { drawPoisson } from "@/lib/science/stats/random-variates";

/** How a simulated detector sees a site, `[site]`: mean counts dark and bright, and the chance to leak during the window. */
export interface Detector {
  dark: Float64Array;
  bright: Float64Array;
  /** Chance that a dark site turns bright within the window (at a uniform moment), and the other way round. */
  darkLeak: number;
  brightLeak: number;
}

/** Returns the counts of one shot, Poisson with leakage, `[site]`. */
export function measureCounts(up: boolean[], detector: Detector, stream: RandomStream): number[] {
  return up.map((isUp, i) => {
    const leak = isUp ? detector.brightLeak : detector.darkLeak;
    const moment = stream.nextUniform() < leak ? stream.nextUniform() : 1;
    const before = isUp ? detector.bright[i] : detector.dark[i];
    const after = isUp ? detector.dark[i] : detector.bright[i];
    return drawPoisson(stream, before * moment + after * (1 - moment));
  });
}

/** Returns a draw of an index from cumulative chances. */
export function drawIndex(cumulative: Float64Array, stream: RandomStream): number {
  const wish = stream.nextUniform() * cumulative[cumulative.length - 1];
  let low = 0;
  let high = cumulative.length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (cumulative[middle] > wish) high = middle;
    else low = middle + 1;
  }
  return low;
}
