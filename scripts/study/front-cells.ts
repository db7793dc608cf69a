/** The simulated truths of the front study. */
import { listPairs } from "@/lib/science/correlators/pairs";
import { planDistanceTraces, planReferenceTraces, siteDistance, type SitePositions, type TracePlan } from "@/lib/science/correlators/trace-plan";
import { gaussianLawOf } from "@/lib/science/theory/gaussian-law";
import { nearestNeighbourLaws, nearestNeighbourMoments, type NearestNeighbourModel } from "@/lib/science/theory/nearest-neighbour";
import type { SpinLaw } from "@/lib/science/theory/spin-law";

/** One row: where the truth comes from, how it is sampled and read. */
export interface FrontCell {
  name: string;
  sites: number;
  times: number;
  shots: number;
  traces: "reference" | "distance";
  truth: DrawnTruth | ExactTruth;
}

/** Correlators that reach a tenth of their maximum at τ = 10 µs · d^γ, as signs of correlated normal variables. */
interface DrawnTruth {
  kind: "drawn";
  gamma: number;
  /** From the front to the maximum. */
  rise_us: number;
  /** The window's end. */
  end_us: number;
}

/** A nearest-neighbour chain with J = 1 rad/ms, sampled exactly. */
interface ExactTruth {
  kind: "exact";
  model: NearestNeighbourModel;
  end_us: number;
}

/** A cell made ready: one law and the exact correlators `[pair]` at each time. */
export interface PreparedCell {
  times_us: Float64Array;
  laws: SpinLaw[];
  correlators: Float64Array[];
  plan: TracePlan;
}

const SHOTS = [250, 1000, 4000];
const STEP_US = 10;
const RISE_US = 40;
const LEVEL = 0.1;
const AMPLITUDE = 0.5;
const DECAY = 25;
/** J in hertz that makes J = 1 rad/ms. */
const UNIT_J_HZ = 1000 / (2 * Math.PI);

function drawn(name: string, gamma: number, traces: "reference" | "distance", end_us: number, shots: readonly number[] = SHOTS): FrontCell[] {
  const truth: DrawnTruth = { kind: "drawn", gamma, rise_us: RISE_US, end_us };
  return shots.map((count) => ({ name, sites: 11, times: 28, shots: count, traces, truth }));
}

function exact(name: string, model: NearestNeighbourModel, sites: number, end_us: number): FrontCell {
  return { name, sites, times: 30, shots: 1000, traces: "distance", truth: { kind: "exact", model, end_us } };
}

/** The rows of the study. */
export const FRONT_CELLS: readonly FrontCell[] = [
  ...drawn("straight", 1, "reference", 150),
  ...drawn("straight, averaged", 1, "distance", 150),
  ...drawn("accelerating", 0.65, "reference", 100),
  ...drawn("decelerating", 1.3, "reference", 240),
  ...drawn("straight, window ends early", 1, "reference", 90, [1000]),
  exact("exact XX chain", "xy", 12, 3200),
  exact("exact Ising chain", "ising", 12, 3200),
];

/** Returns the laws, exact correlators and trace plan of a cell. */
export function prepareCell(cell: FrontCell): PreparedCell {
  const { sites, times, truth, traces } = cell;
  const positions: SitePositions = { x: Float64Array.from({ length: sites }, (_, i) => i), y: null };
  const plan = traces === "reference" ? planReferenceTraces(positions, 0) : planDistanceTraces(positions);
  const times_us = Float64Array.from({ length: times }, (_, k) => ((k + 0.5) * truth.end_us) / times);
  return truth.kind === "exact" ? prepareExact(truth, sites, times_us, plan) : prepareDrawn(truth, positions, times_us, plan);
}

function prepareExact({ model }: ExactTruth, sites: number, times_us: Float64Array, plan: TracePlan): PreparedCell {
  const laws = nearestNeighbourLaws(model, sites, UNIT_J_HZ, times_us);
  return { times_us, laws, correlators: laws.map((law) => nearestNeighbourMoments(law).correlator), plan };
}

function prepareDrawn(truth: DrawnTruth, positions: SitePositions, times_us: Float64Array, plan: TracePlan): PreparedCell {
  const sites = positions.x.length;
  const pairs = listPairs(sites);
  const surrogates = Array.from(times_us, (time) => {
    const correlator = Float64Array.from({ length: pairs.length / 2 }, (_, pair) =>
      signal(truth, siteDistance(positions, pairs[2 * pair], pairs[2 * pair + 1]), time),
    );
    return gaussianLawOf({ mean: new Float64Array(sites), correlator });
  });
  return { times_us, laws: surrogates.map(({ law }) => law), correlators: surrogates.map(({ correlator }) => correlator), plan };
}

/** A smooth rise through a tenth of the maximum on the front, and the maximum from then on. */
function signal({ gamma, rise_us }: DrawnTruth, distance: number, time_us: number): number {
  const start = Math.acos(1 - 2 * LEVEL) / Math.PI;
  const phase = start + ((1 - start) * (time_us - STEP_US * distance ** gamma)) / rise_us;
  const swing = (1 - Math.cos(Math.PI * Math.min(1, Math.max(0, phase)))) / 2;
  return AMPLITUDE * Math.exp(-distance / DECAY) * swing;
}
