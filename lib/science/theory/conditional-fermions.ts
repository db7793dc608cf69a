import { fermionKernel, type FermionKernel } from "@/lib/science/theory/fermion-kernel";
import type { DeterminantLaw, MajoranaLaw } from "@/lib/science/theory/spin-law";

/**
 * A state of free fermions while its sites are read one after another. Level `site` holds the state given the outcomes of
 * all sites before; `condition` writes level `site + 1`. Only a window of sites is kept: reading a site changes nothing
 * beyond the correlation range, which outcomes do not widen. One state lives at a time, in the thread's kernel.
 */
export interface ConditionalState {
  /** Chances within this of 0 or 1 are those up to rounding. */
  rounding: number;
  /** The chance that `site` is up, given the outcomes before. */
  chanceUp(site: number): number;
  condition(site: number, up: boolean): void;
}

/** Elements below this are taken as zero: it moves a correlator by 4e-10 at most, and halves the window ahead of the front. */
const NEGLIGIBLE = 1e-5;
const DOUBLE_ROUNDING = 1e-10;
/** In float32 a chance is good to about 1e-6, far below what any number of shots can tell. */
const SINGLE_ROUNDING = 1e-5;

/** Returns the conditional state of fermions with a projection: K → K ∓ k kᵀ/P (Hough, Krishnapur, Peres and Virág 2006). */
export function conditionalDeterminant({ sites, projection }: DeterminantLaw): ConditionalState {
  const width = windowOf(sites, (i, j) => projection[i * sites + j]);
  const { kernel, memory, levels } = openWindows(sites, width, 1, Float64Array, projection);
  const bytes = memory.BYTES_PER_ELEMENT;
  return {
    rounding: DOUBLE_ROUNDING,
    chanceUp: (site) => memory[levels[site]],
    condition(site, up) {
      const [from, to] = [levels[site], levels[site + 1]];
      const held = Math.min(width, sites - site);
      const chance = memory[from];
      kernel.conditionDeterminant(from * bytes, to * bytes, 0, width, held, up ? -1 / chance : 1 / (1 - chance));
      if (held < sites - site) copyRow(memory, to + (held - 1) * width, projection, (site + held) * sites + site + 1, held);
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
  const { kernel, memory, levels } = openWindows(sites, reach, 2, Float32Array, covariance);
  const bytes = memory.BYTES_PER_ELEMENT;
  return {
    rounding: SINGLE_ROUNDING,
    chanceUp: (site) => (1 + memory[levels[site] + width]) / 2,
    condition(site, up) {
      const [from, to] = [levels[site], levels[site + 1]];
      const held = Math.min(width, size - 2 * site);
      const mean = memory[from + width];
      kernel.conditionMajorana(from * bytes, to * bytes, 0, width * bytes, width, held, up ? 1 / (1 + mean) : -1 / (1 - mean));
      if (held === size - 2 * site) return;
      const source = (2 * site + held) * size + 2 * site + 2;
      copyRow(memory, to + (held - 2) * width, covariance, source, held - 1);
      copyRow(memory, to + (held - 1) * width, covariance, source + size, held);
    },
  };
}

interface Windows<Elements> {
  kernel: FermionKernel;
  /** The kernel's memory; its first 2 · width elements are room for two columns. */
  memory: Elements;
  /** Where every site's window begins, in elements. */
  levels: number[];
}

/** Makes room for all levels, `perSite` operators a site, and fills the first from the whole matrix. */
function openWindows<Elements extends Float32Array | Float64Array>(
  sites: number,
  reach: number,
  perSite: number,
  Elements: { new (buffer: ArrayBufferLike): Elements; BYTES_PER_ELEMENT: number },
  matrix: Float64Array,
): Windows<Elements> {
  const width = reach * perSite;
  const margin = 2 * width + 4;
  const levels: number[] = [];
  let end = margin;
  for (let site = 0; site < sites; site++) {
    levels.push(end);
    end += Math.min(reach, sites - site) * perSite * width;
  }
  const kernel = fermionKernel((end + margin) * Elements.BYTES_PER_ELEMENT);
  const memory = new Elements(kernel.memory.buffer);
  const size = sites * perSite;
  for (let a = 0; a < Math.min(width, size); a++) copyRow(memory, levels[0] + a * width, matrix, a * size, a + 1);
  return { kernel, memory, levels };
}

function copyRow(to: Float32Array | Float64Array, at: number, from: Float64Array, start: number, count: number): void {
  for (let b = 0; b < count; b++) to[at + b] = from[start + b];
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
