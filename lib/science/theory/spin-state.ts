/** A state of N spins in the z basis: bit i of the index is 1 where spin i is up. */
export interface SpinState {
  sites: number;
  /** `[2^N]` */
  real: Float64Array;
  imaginary: Float64Array;
}

/** Returns the state with all spins down along z. */
export function allDown(sites: number): SpinState {
  const state = { sites, real: new Float64Array(2 ** sites), imaginary: new Float64Array(2 ** sites) };
  state.real[0] = 1;
  return state;
}

/** Returns |amplitude|², `[2^N]`. */
export function probabilities({ real, imaginary }: SpinState): Float64Array {
  return real.map((value, s) => value * value + imaginary[s] * imaginary[s]);
}

/** Returns ⟨σz_i⟩. */
export function meanSpin(chances: Float64Array, i: number): number {
  return chances.reduce((sum, chance, s) => sum + ((s >> i) & 1 ? chance : -chance), 0);
}

/** Returns ⟨σz_i σz_j⟩ − ⟨σz_i⟩⟨σz_j⟩. */
export function connectedSpins(chances: Float64Array, i: number, j: number): number {
  const together = chances.reduce((sum, chance, s) => sum + (((s >> i) ^ (s >> j)) & 1 ? -chance : chance), 0);
  return together - meanSpin(chances, i) * meanSpin(chances, j);
}
