import { wordsPerSite, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import type { RandomStream } from "@/lib/science/stats/philox";
import { drawBinomial } from "@/lib/science/stats/random-variates";
import { fillWithNormals } from "@/lib/science/stats/ziggurat";
import { conditionalDeterminant, conditionalMajorana, type ConditionalState } from "@/lib/science/theory/conditional-fermions";
import type { GaussianLaw, SpinLaw } from "@/lib/science/theory/spin-law";

/**
 * Returns independent shots of a law. Fermions are sampled exactly by the chain rule, site after site, for all shots
 * with the same outcomes so far at once, so equal shots come together and their order carries no meaning.
 */
export function drawShots(law: SpinLaw, shots: number, stream: RandomStream): PackedSpins {
  if (law.kind === "gaussian") return drawGaussian(law, shots, stream);
  const state = law.kind === "determinant" ? conditionalDeterminant(law) : conditionalMajorana(law);
  const spins = emptySpins(law.sites, shots);
  if (shots > 0) splitBySite(spins, state, stream, 0, 0, shots);
  return spins;
}

function emptySpins(sites: number, shots: number): PackedSpins {
  return { sites, shots, words: new Uint32Array(sites * wordsPerSite(shots)) };
}

/** Draws how many of the shots `start … start + count − 1` are up at `site`, puts those first, and goes on in both parts. */
function splitBySite(spins: PackedSpins, state: ConditionalState, stream: RandomStream, site: number, start: number, count: number): void {
  const chance = state.chanceUp(site);
  const up = drawUps(stream, count, chance, state.rounding);
  raiseBits(spins, site, start, start + up);
  if (site + 1 === spins.sites) return;
  if (up > 0) {
    state.condition(site, true);
    splitBySite(spins, state, stream, site + 1, start, up);
  }
  if (up < count) {
    state.condition(site, false);
    splitBySite(spins, state, stream, site + 1, start + up, count - up);
  }
}

function drawUps(stream: RandomStream, count: number, chance: number, rounding: number): number {
  if (chance < rounding) return 0;
  if (chance > 1 - rounding) return count;
  if (count === 1) return stream.nextUniform() < chance ? 1 : 0;
  return drawBinomial(stream, count, chance);
}

function raiseBits(spins: PackedSpins, site: number, from: number, to: number): void {
  const offset = site * wordsPerSite(spins.shots);
  for (let s = from; s < to; ) {
    const bit = s & 31;
    const bits = Math.min(32 - bit, to - s);
    spins.words[offset + (s >>> 5)] |= (bits === 32 ? -1 : (1 << bits) - 1) << bit;
    s += bits;
  }
}

function drawGaussian({ sites, factor, threshold }: GaussianLaw, shots: number, stream: RandomStream): PackedSpins {
  const spins = emptySpins(sites, shots);
  const stride = wordsPerSite(shots);
  const noise = new Float64Array(sites);
  for (let s = 0; s < shots; s++) {
    fillWithNormals(noise, stream);
    for (let i = 0; i < sites; i++) {
      let field = 0;
      for (let j = 0; j <= i; j++) field += factor[i * sites + j] * noise[j];
      if (field < threshold[i]) spins.words[i * stride + (s >>> 5)] |= 1 << (s & 31);
    }
  }
  return spins;
}
