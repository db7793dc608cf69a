import { describe, expect, it } from "vitest";
import { pairIndex } from "@/lib/science/correlators/pairs";
import { crossingsOf } from "@/lib/science/front/analyse-front";
import { DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import { fitPowerLaw } from "@/lib/science/front/power-law-fit";
import { besselSeries } from "@/lib/science/theory/bessel";
import { evolve } from "@/lib/science/theory/chebyshev-evolution";
import { powerLawCouplings } from "@/lib/science/theory/couplings";
import { determinantMoments, neelQuench } from "@/lib/science/theory/free-fermion-chain";
import { nearestNeighbourLaws } from "@/lib/science/theory/nearest-neighbour";
import type { MajoranaLaw } from "@/lib/science/theory/spin-law";
import { connectedSpins, meanSpin, probabilities, type SpinState } from "@/lib/science/theory/spin-state";
import { isingFieldQuench, majoranaMoments } from "@/lib/science/theory/transverse-ising-chain";
import { traceSetOf } from "../front/run-fixtures";

/** Chances of every outcome after the Néel quench, from the state vector. */
function neelByStateVector(sites: number, time: number): Float64Array {
  const start: SpinState = { sites, real: new Float64Array(2 ** sites), imaginary: new Float64Array(2 ** sites) };
  let index = 0;
  for (let i = 0; i < sites; i += 2) index |= 1 << i;
  start.real[index] = 1;
  return probabilities(evolveFlipFlop(sites, time, start));
}

/** e^{−iHt} for H = ½ Σ (σxσx + σyσy) of neighbours by its Taylor series in 40 steps, which needs no eigenvectors. */
function evolveFlipFlop(sites: number, time: number, start: SpinState): SpinState {
  const steps = 40;
  let { real, imaginary } = start;
  for (let step = 0; step < steps; step++) {
    let [termReal, termImaginary] = [real, imaginary];
    const [sumReal, sumImaginary] = [Float64Array.from(real), Float64Array.from(imaginary)];
    for (let order = 1; order <= 12; order++) {
      const [hReal, hImaginary] = [flipFlop(sites, termReal), flipFlop(sites, termImaginary)];
      const scale = time / steps / order;
      termReal = hImaginary.map((value) => scale * value);
      termImaginary = hReal.map((value) => -scale * value);
      sumReal.forEach((_, s) => (sumReal[s] += termReal[s]));
      sumImaginary.forEach((_, s) => (sumImaginary[s] += termImaginary[s]));
    }
    [real, imaginary] = [sumReal, sumImaginary];
  }
  return { sites, real, imaginary };
}

/** ½ (σxσx + σyσy) exchanges neighbours that differ, with amplitude 1. */
function flipFlop(sites: number, v: Float64Array): Float64Array {
  const out = new Float64Array(v.length);
  for (let s = 0; s < v.length; s++) {
    for (let i = 0; i + 1 < sites; i++) {
      const two = (s >> i) & 3;
      if (two === 1 || two === 2) out[s] += v[s ^ (3 << i)];
    }
  }
  return out;
}

describe("the Néel quench of the nearest-neighbour XY chain", () => {
  // Numeric checks, section 6: open chain of 8, exact diagonalisation.
  it("has the tabulated means and correlators at N = 8, Jt = 0.5", () => {
    const { mean, correlator } = determinantMoments(neelQuench(8, Float64Array.of(0.5))[0]);
    expect(mean[0]).toBeCloseTo(0.5767248078, 10);
    expect(correlator[pairIndex(8, 0, 1)]).toBeCloseTo(-0.497967407, 10);
    expect(correlator[pairIndex(8, 0, 2)]).toBeCloseTo(-0.1496372543, 10);
    expect(correlator[pairIndex(8, 0, 7)]).toBeCloseTo(-3.24e-8, 10);
  });

  // Numeric checks, section 7 (b): C_n = −J_n(4Jt)², ⟨σ_j⟩ = ±J_0(4Jt) in the bulk.
  it("has Bessel functions in the bulk of a long chain", () => {
    const sites = 60;
    const middle = 30;
    const [early, late] = neelQuench(sites, Float64Array.of(0.5, 2.5)).map(determinantMoments);
    expect(early.correlator[pairIndex(sites, middle, middle + 2)]).toBeCloseTo(-0.124491851749, 11);
    expect(late.correlator[pairIndex(sites, 25, 35)]).toBeCloseTo(-0.043050484446, 11);
    const series = besselSeries(10);
    for (let n = 1; n < 12; n++) {
      expect(late.correlator[pairIndex(sites, 24, 24 + n)]).toBeCloseTo(-(series[n] ** 2), 11);
    }
    expect(late.mean[middle]).toBeCloseTo(series[0], 11);
    expect(late.mean[middle + 1]).toBeCloseTo(-series[0], 11);
  });

  it.each([7, 8])("agrees with the evolution of the whole state vector at N = %d", (sites) => {
    for (const time of [0.3, 1.7]) {
      const chances = neelByStateVector(sites, time);
      const { mean, correlator } = determinantMoments(neelQuench(sites, Float64Array.of(time))[0]);
      for (let i = 0; i < sites; i++) {
        expect(mean[i]).toBeCloseTo(meanSpin(chances, i), 11);
        for (let j = i + 1; j < sites; j++) expect(correlator[pairIndex(sites, i, j)]).toBeCloseTo(connectedSpins(chances, i, j), 11);
      }
    }
  });

  it("starts as the Néel state and keeps half of the spins up", () => {
    const [start, later] = neelQuench(9, Float64Array.of(0, 4.2)).map(determinantMoments);
    start.mean.forEach((value, i) => expect(value).toBeCloseTo(i % 2 === 0 ? 1 : -1, 12));
    expect(later.mean.reduce((sum, value) => sum + value, 0)).toBeCloseTo(1, 11);
  });
});

/** ⟨σx_j σx_l⟩ = (−1)^{l−j} Pf Γ over the Majorana operators from y_j to x_l, sites from 1; here l = j + 2. */
function nextNearestXx(covariance: Float64Array, sites: number, j: number): number {
  const g = (a: number, b: number) => covariance[(2 * j - 1 + a) * 2 * sites + 2 * j - 1 + b];
  return g(0, 1) * g(2, 3) - g(0, 2) * g(1, 3) + g(0, 3) * g(1, 2);
}

describe("the quench of the transverse-field Ising chain from all spins up", () => {
  // Numeric checks, section 7 (c): open chain of 8, exact diagonalisation.
  it.each([
    [1, 1, 0.3, 0.8448499790155871, 0.7167438617566266, 0.2382971585034911, 0.19913528760621224, 1.177486852466103e-8, 0.03172582941475905],
    [1, 0.5, 0.7, 0.2817195118868723, 0.1514641243092809, 0.22104956941867776, 0.05024133751328883, 1.0602306092757224e-5, 0.08406970931368718],
    [1, 2, 0.4, 0.875060689295238, 0.7866539617526898, 0.17304243825490218, 0.13556104781667988, 1.833502411185961e-5, 0.19015379088896187],
  ])("has the tabulated values at N = 8, J = %d, h = %d, t = %d", (coupling, field, time, m1, m4, c12, c45, c26, xx35) => {
    const [law] = isingFieldQuench(8, coupling, field, Float64Array.of(time));
    const { mean, correlator } = majoranaMoments(law);
    expect(mean[0]).toBeCloseTo(m1, 12);
    expect(mean[3]).toBeCloseTo(m4, 12);
    expect(correlator[pairIndex(8, 0, 1)]).toBeCloseTo(c12, 12);
    expect(correlator[pairIndex(8, 3, 4)]).toBeCloseTo(c45, 12);
    expect(correlator[pairIndex(8, 1, 5)]).toBeCloseTo(c26, 12);
    expect(nextNearestXx(law.covariance, 8, 3)).toBeCloseTo(xx35, 12);
  });

  it("without a field is the Ising quench of the state vector", () => {
    const chances = probabilities(evolve({ sites: 6, couplings: powerLawCouplings(6, Infinity, 1), flip: -1, agree: 0 }, allUp(6), 0.6));
    const { mean, correlator } = majoranaMoments(isingFieldQuench(6, 1, 0, Float64Array.of(0.6))[0]);
    for (let i = 0; i < 6; i++) {
      expect(mean[i]).toBeCloseTo(meanSpin(chances, i), 12);
      for (let j = i + 1; j < 6; j++) expect(correlator[pairIndex(6, i, j)]).toBeCloseTo(connectedSpins(chances, i, j), 12);
    }
  });

  it("keeps Γ antisymmetric with ΓΓᵀ = 1: the state stays pure", () => {
    const size = 20;
    const [{ covariance }] = isingFieldQuench(10, 1, 1, Float64Array.of(3.3));
    for (let a = 0; a < size; a++) {
      for (let b = 0; b < size; b++) {
        expect(covariance[a * size + b]).toBeCloseTo(-covariance[b * size + a], 12);
        let sum = 0;
        for (let c = 0; c < size; c++) sum += covariance[a * size + c] * covariance[b * size + c];
        expect(sum).toBeCloseTo(a === b ? 1 : 0, 11);
      }
    }
  });

  // Numeric checks, extra.tfim_bulk_t10 (J = 1, maximum over t < 9, or 18 at h = 1/2): first upcrossing of a tenth of the maximum.
  it.each([
    [1, [0.076636, 0.319905, 1.093105, 2.356248, 4.863565]],
    [2, [0.062307, 0.259, 0.834332, 2.04618, 4.479633]],
    [0.5, [0.079629, 0.983827, 2.122021, 4.628099, 9.531729]],
  ])("reaches a tenth of its maximum at the bulk's times for h = %d", (field, expected) => {
    const end = field < 1 ? 18 : 9;
    const coarse = Float64Array.from({ length: 10 * end }, (_, k) => k / 10);
    const laws = isingFieldQuench(BULK, 1, field, coarse);
    [1, 2, 5, 10, 20].forEach((distance, at) => {
      const trace = laws.map((law) => bulkSignal(law, distance));
      const peak = coarse[trace.indexOf(Math.max(...trace))];
      const level = maximumNear(peak, end, field, distance) / 10;
      const before = coarse[trace.findIndex((value) => value >= level) - 1];
      expect(Math.abs(crossingAfter(before, level, field, distance) - expected[at])).toBeLessThan(2e-5);
    });
  });
});

/** Long enough that nothing reflected at the ends reaches the middle within the windows used here. */
const BULK = 72;

function bulkSignal(law: MajoranaLaw, distance: number): number {
  return Math.abs(majoranaMoments(law).correlator[pairIndex(BULK, BULK / 2 - Math.ceil(distance / 2), BULK / 2 + Math.floor(distance / 2))]);
}

/** The maximum within 0.1 of a time, by a parabola through the best three samples. */
function maximumNear(time: number, end: number, field: number, distance: number): number {
  const step = 0.02;
  const times = Float64Array.from({ length: 11 }, (_, m) => Math.min(end, Math.max(0, time + (m - 5) * step)));
  const signal = isingFieldQuench(BULK, 1, field, times).map((law) => bulkSignal(law, distance));
  const best = signal.indexOf(Math.max(...signal));
  if (best === 0 || best === 10 || times[best + 1] - times[best - 1] < 1.99 * step) return signal[best];
  const bend = signal[best - 1] - 2 * signal[best] + signal[best + 1];
  return signal[best] - (signal[best + 1] - signal[best - 1]) ** 2 / (8 * bend);
}

/** The level's upcrossing within 0.1 after `before`, by false position (Illinois). */
function crossingAfter(before: number, level: number, field: number, distance: number): number {
  const excess = (time: number) => bulkSignal(isingFieldQuench(BULK, 1, field, Float64Array.of(time))[0], distance) - level;
  let [low, high] = [before, before + 0.1];
  let [atLow, atHigh] = [excess(low), excess(high)];
  for (let step = 0; step < 20; step++) {
    const middle = high - (atHigh * (high - low)) / (atHigh - atLow);
    const at = excess(middle);
    if (Math.abs(at) < 1e-6 * level) return middle;
    if (at > 0) [high, atHigh, atLow] = [middle, at, atLow / 2];
    else [low, atLow, atHigh] = [middle, at, atHigh / 2];
  }
  return (low + high) / 2;
}

function allUp(sites: number): SpinState {
  const state = { sites, real: new Float64Array(2 ** sites), imaginary: new Float64Array(2 ** sites) };
  state.real[2 ** sites - 1] = 1;
  return state;
}

describe("the nearest-neighbour references in a run's units", () => {
  it("take J/2π in hertz and times in µs", () => {
    const [law] = nearestNeighbourLaws("xy", 8, 1000, Float64Array.of(500 / (2 * Math.PI)));
    if (law.kind !== "determinant") throw new Error("the XY chain has a fixed number of fermions");
    expect(determinantMoments(law).mean[0]).toBeCloseTo(0.5767248078, 9);
  });
});

describe("the front that the extractor reads from the exact nearest-neighbour chain", () => {
  // Numeric checks, section 7, front rule bias: x = 4Jt of the first 10 % crossing of J_n(x)², and γ over distances 1–7.
  const sites = 56;
  const x = Float64Array.from({ length: 641 }, (_, k) => k / 50);
  const laws = neelQuench(sites, x.map((value) => value / 4));
  const distances = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10];
  const value = distances.map((n) => laws.map((law) => determinantMoments(law).correlator[pairIndex(sites, 23, 23 + n)]));
  const traces = traceSetOf({ times_us: [...x], distances, value, error: distances.map(() => [...x].map(() => 0)) });
  const times = Float64Array.from(crossingsOf(traces, DEFAULT_FRONT_RULE), ({ time_us }) => time_us);

  it("crosses at the exact times", () => {
    const exact = [0.3745327981, 1.1762345643, 2.0521625161, 2.9570912487, 3.8781566103, 4.8097631883, 5.7489113995, 6.6937805078, 7.6431703969, 8.5962421847];
    exact.forEach((time, j) => expect(Math.abs(times[j] - time)).toBeLessThan(2e-4));
  });

  it("bends to γ = 1.39 over distances 1–7 and 1.33 over 1–10", () => {
    const gamma = (most: number) => fitPowerLaw(Float64Array.from(distances.slice(0, most)), times.slice(0, most), times.slice(0, most)).slope;
    expect(Math.abs(gamma(7) - 1.390668)).toBeLessThan(2e-4);
    expect(Math.abs(gamma(10) - 1.331791)).toBeLessThan(2e-4);
  });
});
