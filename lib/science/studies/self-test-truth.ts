import { findCrossing } from "@/lib/science/front/crossing";
import { createCrossingScratch } from "@/lib/science/front/crossing-kernel";
import { listPairs, pairCount } from "@/lib/science/correlators/pairs";
import { siteDistance } from "@/lib/science/correlators/trace-plan";
import { median } from "@/lib/science/stats/quantiles";
import type { SelfTestInput } from "@/lib/science/studies/self-test-input";

/** The smooth signal of one trace or pair: zero, a rise through the level on the fitted front, a maximum, half of it later. */
interface Signal {
  /** Signed. */
  amplitude: number;
  /** The level as a share of the amplitude. */
  levelShare: number;
  front_us: number;
  /** From the front to the maximum. */
  rise_us: number;
}

/** The power law d = a τ^γ⁻¹ that the truth follows. */
export interface TruthLaw {
  /** In sites per µs^β. */
  a: number;
  gamma: number;
}

const SAME_DISTANCE = 1e-6;
/** Noise alone makes a maximum of about this many standard errors; an unresolved trace is not given more signal than it has. */
const NOISE_MAXIMUM = 2;

/**
 * Returns the correlators `[k][pair]` that a self-test asks for: pairs of a trace have its amplitude, rise and level
 * share, with the crossing on the fitted power law; other pairs what lies between the traces nearest in distance.
 */
export function wantedCorrelators(input: SelfTestInput, law: TruthLaw): Float64Array[] {
  const signals = traceSignals(input, law);
  const sites = input.positions.x.length;
  const pairs = listPairs(sites);
  const traceOf = traceOfPairs(input, pairCount(sites));
  const others = signalByDistance(input, signals);
  const ofPair = Array.from(traceOf, (trace, pair) => {
    const distance = siteDistance(input.positions, pairs[2 * pair], pairs[2 * pair + 1]);
    const signal = trace >= 0 ? signals[trace] : others(distance);
    return { ...signal, front_us: frontTime_us(law, distance) };
  });
  return Array.from(input.times_us, (time) => Float64Array.from(ofPair, (signal) => signalAt(signal, time)));
}

/** τ = (d/a)^γ */
function frontTime_us({ a, gamma }: TruthLaw, distance: number): number {
  return Math.exp(gamma * Math.log(distance / a));
}

function signalAt({ amplitude, levelShare, front_us, rise_us }: Signal, time_us: number): number {
  const start = Math.acos(1 - 2 * levelShare) / Math.PI;
  const phase = start + ((1 - start) * (time_us - front_us)) / rise_us;
  if (phase <= 0) return 0;
  const swing = (1 - Math.cos(Math.PI * Math.min(2, phase))) / 2;
  return phase <= 1 ? amplitude * swing : (amplitude * (1 + swing)) / 2;
}

function traceSignals({ observedTraces, rule, times_us }: SelfTestInput, law: TruthLaw): Signal[] {
  const scratch = createCrossingScratch(times_us.length);
  const times = times_us.length;
  const found = observedTraces.labels.map((_, q) => {
    const { maximum, level, status, peakTimeIndex } = findCrossing(observedTraces, q, rule, scratch);
    const front_us = frontTime_us(law, observedTraces.distances[q]);
    if (peakTimeIndex < 0) return { amplitude: 0, levelShare: 0.1, front_us, rise_us: NaN };
    const at = q * times + peakTimeIndex;
    const size = status === "unresolved" ? Math.max(0, maximum - NOISE_MAXIMUM * (observedTraces.error[at] || 0)) : maximum;
    const rise_us = status === "resolved" ? times_us[peakTimeIndex] - front_us : NaN;
    return { amplitude: Math.sign(observedTraces.value[at]) * size, levelShare: shareWithin(level / maximum), front_us, rise_us };
  });
  return withUsableRises(found, median(Array.from(times_us.subarray(1), (time, k) => time - times_us[k])));
}

function shareWithin(share: number): number {
  return Number.isFinite(share) ? Math.min(0.9, Math.max(0.01, share)) : 0.1;
}

/** A maximum before the fitted front, or next to it, says nothing of the rise: the other traces' median stands in. */
function withUsableRises(signals: Signal[], step_us: number): Signal[] {
  const usable = signals.map(({ rise_us }) => rise_us).filter((rise) => rise >= step_us);
  const typical = usable.length === 0 ? 2 * step_us : median(usable);
  return signals.map((signal) => (signal.rise_us >= step_us ? signal : { ...signal, rise_us: typical }));
}

function traceOfPairs({ traces }: SelfTestInput, count: number): Int32Array {
  const traceOf = new Int32Array(count).fill(-1);
  traces.distances.forEach((_, q) => {
    for (const pair of traces.pairs.subarray(traces.offsets[q], traces.offsets[q + 1])) traceOf[pair] = q;
  });
  return traceOf;
}

type SignalShape = Omit<Signal, "front_us">;

/** Straight lines in distance between the traces' signals, equal distances averaged, constant beyond the ends. */
function signalByDistance({ traces }: SelfTestInput, signals: Signal[]): (distance: number) => SignalShape {
  const order = Array.from(traces.distances.keys()).sort((p, q) => traces.distances[p] - traces.distances[q]);
  const knots: { distance: number; members: Signal[] }[] = [];
  for (const q of order) {
    const last = knots.at(-1);
    if (last !== undefined && traces.distances[q] - last.distance < SAME_DISTANCE) last.members.push(signals[q]);
    else knots.push({ distance: traces.distances[q], members: [signals[q]] });
  }
  const shapes = knots.map(({ members }) => meanShape(members));
  return (distance) => {
    const right = knots.findIndex((knot) => knot.distance >= distance);
    if (right === -1) return shapes[shapes.length - 1];
    if (right === 0) return shapes[0];
    const share = (distance - knots[right - 1].distance) / (knots[right].distance - knots[right - 1].distance);
    return blend(shapes[right - 1], shapes[right], share);
  };
}

function meanShape(members: Signal[]): SignalShape {
  const mean = (of: (signal: Signal) => number) => members.reduce((sum, signal) => sum + of(signal), 0) / members.length;
  return { amplitude: mean((s) => s.amplitude), levelShare: mean((s) => s.levelShare), rise_us: mean((s) => s.rise_us) };
}

function blend(left: SignalShape, right: SignalShape, share: number): SignalShape {
  const between = (a: number, b: number) => a + share * (b - a);
  return {
    amplitude: between(left.amplitude, right.amplitude),
    levelShare: between(left.levelShare, right.levelShare),
    rise_us: between(left.rise_us, right.rise_us),
  };
}
