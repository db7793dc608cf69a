/**
 * Which nearest-neighbour chain a run is held against. `xy`: ½ J Σ (σxσx + σyσy) from the Néel state. `ising`: the
 * transverse field, −J Σ σxσx − h Σ σz with h = J, from all spins up. Both are read along z.
 */
export type NearestNeighbourModel = "xy" | "ising";
