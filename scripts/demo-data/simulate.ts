import { powerLawCouplings } from "@/lib/science/theory/couplings";
import { evolve, isingHamiltonian, xyHamiltonian } from "@/lib/science/theory/chebyshev-evolution";
import { gaussianSurrogate } from "@/lib/science/theory/gaussian-surrogate";
import { drawIndex, measureCounts, type Detector } from "@/lib/science/theory/measured-counts";
import { allDown, probabilities } from "@/lib/science/theory/spin-state";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";

export interface SimulatedRun {
  sites: number;
  times_us: number[];
  shots: number;
  /** `[k][shot][site]` */
  counts: Uint16Array;
}

export interface QuenchSettings {
  model: "xy" | "ising";
  sites: number;
  alpha: number;
  /** Nearest-neighbour J/2π in Hz. */
  j0Hz: number;
  times_us: number[];
  shots: number;
  detector: Detector;
  seed: number;
}

/** Simulates a quench from all spins down: exact state, projective shots along z, Poisson counts. */
export function simulateQuench({ model, sites, alpha, j0Hz, times_us, shots, detector, seed }: QuenchSettings): SimulatedRun {
  // Rad per µs.
  const couplings = powerLawCouplings(sites, alpha, 2 * Math.PI * j0Hz * 1e-6);
  const hamiltonian = model === "xy" ? xyHamiltonian(sites, couplings) : isingHamiltonian(sites, couplings);
  const counts = new Uint16Array(times_us.length * shots * sites);
  let state = allDown(sites);
  times_us.forEach((time, k) => {
    state = evolve(hamiltonian, state, time - (k === 0 ? 0 : times_us[k - 1]));
    let sum = 0;
    const cumulative = probabilities(state).map((chance) => (sum += chance));
    for (let s = 0; s < shots; s++) {
      const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, k, s);
      const outcome = drawIndex(cumulative, stream);
      const up = Array.from({ length: sites }, (_, i) => ((outcome >> i) & 1) === 1);
      counts.set(measureCounts(up, detector, stream), (k * shots + s) * sites);
    }
  });
  return { sites, times_us, shots, counts };
}

export interface SurrogateSettings {
  sites: number;
  /** The correlation length grows by this many sites per µs. */
  speed: number;
  times_us: number[];
  shots: number;
  detector: Detector;
  seed: number;
}

/** Simulates a run whose front is straight by construction. */
export function simulateSurrogate({ sites, speed, times_us, shots, detector, seed }: SurrogateSettings): SimulatedRun {
  const counts = new Uint16Array(times_us.length * shots * sites);
  times_us.forEach((time, k) => {
    const drawSpins = gaussianSurrogate(sites, speed * time);
    for (let s = 0; s < shots; s++) {
      const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, k, s);
      counts.set(measureCounts(drawSpins(stream), detector, stream), (k * shots + s) * sites);
    }
  });
  return { sites, times_us, shots, counts };
}

/** Simulates calibration shots: every site prepared dark, or bright. Rows are `[shot][site]`. */
export function simulateCalibration(prepared: "dark" | "bright", shots: number, detector: Detector, seed: number): Uint16Array {
  const sites = detector.dark.length;
  const counts = new Uint16Array(shots * sites);
  const up = new Array<boolean>(sites).fill(prepared === "bright");
  for (let s = 0; s < shots; s++) {
    // Evolution times count from 0; calibration takes the indices no time can have.
    const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, prepared === "dark" ? 100_000 : 100_001, s);
    counts.set(measureCounts(up, detector, stream), s * sites);
  }
  return counts;
}
