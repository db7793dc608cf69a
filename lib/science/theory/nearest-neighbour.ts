import { determinantMoments, neelQuench } from "@/lib/science/theory/free-fermion-chain";
import { isingFieldQuench, majoranaMoments } from "@/lib/science/theory/transverse-ising-chain";
import type { DeterminantLaw, MajoranaLaw, SpinMoments } from "@/lib/science/theory/spin-law";

/**
 * Which nearest-neighbour chain a run is held against. `xy`: ½ J Σ (σxσx + σyσy) from the Néel state. `ising`: the
 * transverse field, −J Σ σxσx − h Σ σz with h = J, from all spins up. Both are read along z.
 */
export type NearestNeighbourModel = "xy" | "ising";

/**
 * Returns the model's state at each time: an open chain of `sites` equal neighbours coupled by J = `j_hz` · 2π.
 * Times in µs. For `ising` the field is h = J, the critical one.
 */
export function nearestNeighbourLaws(model: NearestNeighbourModel, sites: number, j_hz: number, times_us: Float64Array): (DeterminantLaw | MajoranaLaw)[] {
  const couplingTimes = times_us.map((time) => 2 * Math.PI * j_hz * 1e-6 * time);
  return model === "xy" ? neelQuench(sites, couplingTimes) : isingFieldQuench(sites, 1, 1, couplingTimes);
}

/** Returns ⟨σ_i⟩ `[site]` and C_ij `[pair]` of a model's state. */
export function nearestNeighbourMoments(law: DeterminantLaw | MajoranaLaw): SpinMoments {
  return law.kind === "determinant" ? determinantMoments(law) : majoranaMoments(law);
}
