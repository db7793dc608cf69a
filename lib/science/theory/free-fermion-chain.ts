import { pairCount } from "@/lib/science/correlators/pairs";
import type { DeterminantLaw, SpinMoments } from "@/lib/science/theory/spin-law";

/** Returns the single-particle amplitudes' table for an open chain: sin(πk(j+1)/(N+1)) √(2/(N+1)), `[k][site]`, k from 1. */
function standingWaves(sites: number): Float64Array {
  const waves = new Float64Array(sites * sites);
  const norm = Math.sqrt(2 / (sites + 1));
  for (let k = 0; k < sites; k++) {
    for (let j = 0; j < sites; j++) {
      // The angle is reduced in whole numbers, which keeps the last digits at k·j in the thousands.
      const turns = ((k + 1) * (j + 1)) % (2 * (sites + 1));
      waves[k * sites + j] = norm * Math.sin((Math.PI * turns) / (sites + 1));
    }
  }
  return waves;
}

/**
 * Returns the state at each time (`couplingTimes`, J·t) of an open chain under H = ½ J Σ (σxσx + σyσy) between
 * neighbours, from the Néel state with site 0 up. Jordan and Wigner 1928, Lieb, Schultz and Mattis 1961: fermions that hop
 * with amplitude J, energies 2J cos(πk/(N+1)). G_jl is real or imaginary by sublattice; a phase i on every other site,
 * which no probability sees, makes it real.
 */
export function neelQuench(sites: number, couplingTimes: Float64Array): DeterminantLaw[] {
  const waves = standingWaves(sites);
  return Array.from(couplingTimes, (time) => ({ kind: "determinant", sites, projection: projectionAt(waves, sites, time) }));
}

function projectionAt(waves: Float64Array, sites: number, time: number): Float64Array {
  const occupied = Math.ceil(sites / 2);
  const cosine = new Float64Array(sites);
  const sine = new Float64Array(sites);
  for (let k = 0; k < sites; k++) {
    const energy = 2 * Math.cos((Math.PI * (k + 1)) / (sites + 1));
    cosine[k] = Math.cos(energy * time);
    sine[k] = Math.sin(energy * time);
  }
  const amplitude = new Float64Array(sites * occupied);
  for (let j = 0; j < sites; j++) {
    const phase = j % 2 === 0 ? cosine : sine;
    for (let k = 0; k < sites; k++) {
      const share = waves[k * sites + j] * phase[k];
      for (let m = 0; m < occupied; m++) amplitude[j * occupied + m] += share * waves[k * sites + 2 * m];
    }
  }
  return timesOwnTranspose(amplitude, sites, occupied);
}

function timesOwnTranspose(rows: Float64Array, count: number, length: number): Float64Array {
  const product = new Float64Array(count * count);
  for (let i = 0; i < count; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = 0;
      for (let m = 0; m < length; m++) sum += rows[i * length + m] * rows[j * length + m];
      product[i * count + j] = product[j * count + i] = sum;
    }
  }
  return product;
}

/** Returns ⟨σ_j⟩ = 2G_jj − 1 and C_jl = −4 G_jl². */
export function determinantMoments({ sites, projection }: DeterminantLaw): SpinMoments {
  const mean = Float64Array.from({ length: sites }, (_, j) => 2 * projection[j * sites + j] - 1);
  const correlator = new Float64Array(pairCount(sites));
  let pair = 0;
  for (let i = 0; i < sites; i++) {
    for (let j = i + 1; j < sites; j++) correlator[pair++] = -4 * projection[i * sites + j] ** 2;
  }
  return { mean, correlator };
}
