import type { DeterminantLaw, MajoranaLaw } from "@/lib/science/theory/spin-law";

/**
 * A state of free fermions while its sites are read one after another. Level `site` holds the state given the outcomes of
 * all sites before; `condition` writes level `site + 1`. Only a window of sites is kept: reading a site changes nothing
 * beyond the correlation range, which outcomes do not widen.
 */
export interface ConditionalState {
  /** The chance that `site` is up, given the outcomes before. */
  chanceUp(site: number): number;
  condition(site: number, up: boolean): void;
}

/** Elements below this are taken as zero: it moves a correlator by 4e-10 at most, and halves the window ahead of the front. */
const NEGLIGIBLE = 1e-5;

/** Returns the conditional state of fermions with a projection: K → K ∓ k kᵀ/P (Hough, Krishnapur, Peres and Virág 2006). */
export function conditionalDeterminant({ sites, projection }: DeterminantLaw): ConditionalState {
  const width = windowOf(sites, (i, j) => projection[i * sites + j]);
  const levels = levelsOf(sites, width, 1);
  const column = new Float64Array(width);
  fillWindow(levels[0], width, Math.min(width, sites), (a, b) => projection[a * sites + b]);
  return {
    chanceUp: (site) => levels[site][0],
    condition(site, up) {
      const [from, to] = [levels[site], levels[site + 1]];
      const held = Math.min(width, sites - site);
      const factor = up ? -1 / from[0] : 1 / (1 - from[0]);
      for (let a = 0; a < held; a++) column[a] = from[a * width];
      for (let a = 1; a < held; a++) {
        const scaled = factor * column[a];
        const source = a * width;
        const target = source - width - 1;
        for (let b = 1; b <= a; b++) to[target + b] = from[source + b] + scaled * column[b];
      }
      if (held < sites - site) copyRow(to, width, held - 1, (b) => projection[(site + held) * sites + site + 1 + b]);
    },
  };
}

/**
 * Returns the conditional state of a Gaussian state by its Majorana covariance:
 * Γ_cd → Γ_cd + s (Γ_ac Γ_bd − Γ_bc Γ_ad)/(1 + s⟨σ⟩) after reading σ = s at the site of a, b (Bravyi 2005).
 */
export function conditionalMajorana({ sites, covariance }: MajoranaLaw): ConditionalState {
  const size = 2 * sites;
  const reach = windowOf(sites, (i, j) => largestOfBlock(covariance, size, i, j));
  const width = 2 * reach;
  const levels = levelsOf(sites, reach, 4);
  const [first, second] = [new Float64Array(width), new Float64Array(width)];
  fillWindow(levels[0], width, Math.min(width, size), (a, b) => covariance[a * size + b]);
  return {
    chanceUp: (site) => (1 + levels[site][width]) / 2,
    condition(site, up) {
      const [from, to] = [levels[site], levels[site + 1]];
      const held = Math.min(width, size - 2 * site);
      const factor = up ? 1 / (1 + from[width]) : -1 / (1 - from[width]);
      for (let c = 2; c < held; c++) [first[c], second[c]] = [from[c * width], from[c * width + 1]];
      for (let c = 2; c < held; c++) {
        const [u, v] = [factor * first[c], factor * second[c]];
        const source = c * width;
        const target = source - 2 * width - 2;
        for (let d = 2; d < c; d++) to[target + d] = from[source + d] + u * second[d] - v * first[d];
      }
      if (held === size - 2 * site) return;
      const next = 2 * site + held;
      copyRow(to, width, held - 2, (b) => covariance[next * size + 2 * site + 2 + b]);
      copyRow(to, width, held - 1, (b) => covariance[(next + 1) * size + 2 * site + 2 + b]);
    },
  };
}

function largestOfBlock(covariance: Float64Array, size: number, i: number, j: number): number {
  const at = 2 * i * size + 2 * j;
  return Math.max(Math.abs(covariance[at]), Math.abs(covariance[at + 1]), Math.abs(covariance[at + size]), Math.abs(covariance[at + size + 1]));
}

/** How many sites a window holds: the range of correlations, and the site itself. */
function windowOf(sites: number, element: (i: number, j: number) => number): number {
  let range = 0;
  for (let i = 0; i < sites; i++) {
    for (let j = i + range + 1; j < sites; j++) if (Math.abs(element(i, j)) > NEGLIGIBLE) range = j - i;
  }
  return range + 1;
}

function levelsOf(sites: number, reach: number, perPair: number): Float64Array[] {
  return Array.from({ length: sites }, (_, site) => new Float64Array(Math.min(reach, sites - site) * reach * perPair));
}

/** Fills the lower triangle, diagonal included. */
function fillWindow(level: Float64Array, width: number, held: number, element: (a: number, b: number) => number): void {
  for (let a = 0; a < held; a++) copyRow(level, width, a, (b) => element(a, b));
}

function copyRow(level: Float64Array, width: number, row: number, element: (b: number) => number): void {
  for (let b = 0; b <= row; b++) level[row * width + b] = element(b);
}
