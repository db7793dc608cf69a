import { besselSeries } from "@/lib/science/theory/bessel";
import type { SpinState } from "@/lib/science/theory/spin-state";

/** H = Σ_{i<j} J_ij (flip · σx_i σx_j + agree · σz_i σz_j); couplings angular, `[i][j]`. */
export interface PairHamiltonian {
  sites: number;
  couplings: Float64Array;
  flip: number;
  agree: number;
}

/** ½ Σ J (σxσx + σzσz): the XY quench that is read out along z. */
export function xyHamiltonian(sites: number, couplings: Float64Array): PairHamiltonian {
  return { sites, couplings, flip: 0.5, agree: 0.5 };
}

/** Σ J σxσx: the Ising quench that is read out along z. */
export function isingHamiltonian(sites: number, couplings: Float64Array): PairHamiltonian {
  return { sites, couplings, flip: 1, agree: 0 };
}

/**
 * Returns e^{−iHt} of the state by the Chebyshev series Σ (2 − δ_k0)(−i)^k J_k(at) T_k(H/a) with a ≥ ‖H‖ (Tal-Ezer and
 * Kosloff 1984); accurate to rounding. Costs about a·t products with H, each N²/2 · 2^N.
 */
export function evolve(hamiltonian: PairHamiltonian, state: SpinState, time: number): SpinState {
  const apply = scaledProduct(hamiltonian);
  const series = besselSeries(apply.bound * time);
  const result = scaled(state, series[0]);
  let before = state;
  let current = apply.times(state, 1, null);
  for (let k = 1; k < series.length; k++) {
    addTimesPowerOfMinusI(result, current, 2 * series[k], k);
    const next = apply.times(current, 2, before);
    before = current;
    current = next;
  }
  return result;
}

function scaledProduct({ sites, couplings, flip, agree }: PairHamiltonian) {
  const pairs: { mask: number; coupling: number }[] = [];
  let total = 0;
  for (let i = 0; i < sites; i++) {
    for (let j = i + 1; j < sites; j++) {
      pairs.push({ mask: (1 << i) | (1 << j), coupling: couplings[i * sites + j] });
      total += Math.abs(couplings[i * sites + j]);
    }
  }
  const bound = total * (Math.abs(flip) + Math.abs(agree));
  const diagonal = new Float64Array(2 ** sites);
  for (const { mask, coupling } of pairs) {
    for (let s = 0; s < diagonal.length; s++) diagonal[s] += (agree * coupling * ((s & mask) === 0 || (s & mask) === mask ? 1 : -1)) / bound;
  }
  const flips = pairs.map(({ mask, coupling }) => ({ mask, amount: (flip * coupling) / bound }));
  /** factor · (H/a) v − minus */
  const times = (state: SpinState, factor: number, minus: SpinState | null): SpinState => ({
    sites,
    real: product(diagonal, flips, state.real, factor, minus?.real ?? null),
    imaginary: product(diagonal, flips, state.imaginary, factor, minus?.imaginary ?? null),
  });
  return { bound, times };
}

function product(diagonal: Float64Array, flips: { mask: number; amount: number }[], v: Float64Array, factor: number, minus: Float64Array | null): Float64Array {
  const out = v.map((value, s) => diagonal[s] * value);
  for (const { mask, amount } of flips) {
    for (let s = 0; s < v.length; s++) out[s] += amount * v[s ^ mask];
  }
  for (let s = 0; s < v.length; s++) out[s] = factor * out[s] - (minus ? minus[s] : 0);
  return out;
}

function scaled({ sites, real, imaginary }: SpinState, factor: number): SpinState {
  return { sites, real: real.map((value) => factor * value), imaginary: imaginary.map((value) => factor * value) };
}

/** Adds amount · (−i)^power · term to `result`, in place. */
function addTimesPowerOfMinusI(result: SpinState, term: SpinState, amount: number, power: number): void {
  const [fromReal, fromImaginary] = [
    [1, 0],
    [0, -1],
    [-1, 0],
    [0, 1],
  ][power % 4];
  for (let s = 0; s < result.real.length; s++) {
    result.real[s] += amount * (fromReal * term.real[s] - fromImaginary * term.imaginary[s]);
    result.imaginary[s] += amount * (fromReal * term.imaginary[s] + fromImaginary * term.real[s]);
  }
}
