import { findCrossing } from "@/lib/science/front/crossing";
import { createCrossingScratch } from "@/lib/science/front/crossing-kernel";
import { listPairs, pairCount } from "@/lib/science/correlators/pairs";
import { siteDistance } from "@/lib/science/correlators/trace-plan";
import type { FrontRule } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { mean } from "@/lib/science/stats/intervals";
import { median } from "@/lib/science/stats/quantiles";
import { halfWayShare, plateauOf, riseOfSwing, swingAt, type Signal, type SignalShape } from "@/lib/science/studies/signal-shape";
import type { SelfTestInput } from "@/lib/science/studies/self-test-input";

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
 * Returns the correlators `[k][pair]` that a self-test may ask for, in two forms: signals that swing up and down, and
 * signals that rise for good. Pairs of a trace have its amplitude, rise and level share, with the crossing on the fitted power law;
 * other pairs what lies between the traces nearest in distance.
 */
export function wantedCorrelators(input: SelfTestInput, law: TruthLaw): { swing: Float64Array[]; plateau: Float64Array[] } {
  const signals = signalsOfPairs(input, law);
  const end_us = input.times_us[input.times_us.length - 1];
  const sample = (forms: ((time_us: number) => number)[]) =>
    Array.from(input.times_us, (time) => Float64Array.from(forms, (form) => form(time)));
  return {
    swing: sample(signals.map((signal) => (time_us) => swingAt(signal, time_us))),
    plateau: sample(signals.map((signal) => plateauOf(signal, end_us, law.gamma))),
  };
}

function signalsOfPairs(input: SelfTestInput, law: TruthLaw): Signal[] {
  const signals = traceSignals(input, law);
  const sites = input.positions.x.length;
  const pairs = listPairs(sites);
  const others = signalByDistance(input, signals);
  return Array.from(traceOfPairs(input, pairCount(sites)), (trace, pair) => {
    const distance = siteDistance(input.positions, pairs[2 * pair], pairs[2 * pair + 1]);
    const signal = trace >= 0 ? signals[trace] : others(distance);
    const front_us = frontTime_us(law, distance);
    // A maximum beyond the window would leave less than the amplitude inside, and a level that is crossed too early.
    const room_us = input.times_us[input.times_us.length - 1] - front_us;
    return { ...signal, front_us, rise_us: room_us > 0 ? Math.min(signal.rise_us, room_us) : signal.rise_us };
  });
}

/** Returns τ = (d/a)^γ, µs. */
export function frontTime_us({ a, gamma }: TruthLaw, distance: number): number {
  return Math.exp(gamma * Math.log(distance / a));
}

function traceSignals({ observedTraces, rule, times_us }: SelfTestInput, law: TruthLaw): Signal[] {
  const scratch = createCrossingScratch(times_us.length);
  const found = observedTraces.labels.map((_, q) => {
    const crossing = findCrossing(observedTraces, q, rule, scratch);
    const { maximum, level, status, peakTimeIndex } = crossing;
    const front_us = frontTime_us(law, observedTraces.distances[q]);
    if (peakTimeIndex < 0) return { amplitude: 0, levelShare: 0.1, front_us, rise_us: NaN, tailShare: 1, halfWayRatio: NaN };
    const at = q * times_us.length + peakTimeIndex;
    const size = status === "unresolved" ? Math.max(0, maximum - NOISE_MAXIMUM * (observedTraces.error[at] || 0)) : maximum;
    const levelShare = shareWithin(level / maximum);
    // Half-way from the level to the maximum the noise disturbs least; the maximum's own time is mostly noise.
    const middle: FrontRule = { ...rule, rule: "fraction-of-max", level: halfWayShare(levelShare), method: "isotonic" };
    const half_us = findCrossing(observedTraces, q, middle, scratch).time_us;
    const isResolved = status === "resolved";
    return {
      amplitude: Math.sign(observedTraces.value[at]) * size,
      levelShare,
      front_us,
      rise_us: isResolved ? riseOfSwing(half_us - crossing.time_us, levelShare) : NaN,
      tailShare: tailOf(observedTraces, q, peakTimeIndex),
      halfWayRatio: isResolved ? half_us / crossing.time_us : NaN,
    };
  });
  return withUsableRises(found, median(Array.from(times_us.subarray(1), (time, k) => time - times_us[k])));
}

/** The mean after the maximum as a share of it, 1 where nothing comes after. */
function tailOf({ value, times_us }: TraceSet, trace: number, peakTimeIndex: number): number {
  const row = trace * times_us.length;
  const after = value.subarray(row + peakTimeIndex + 1, row + times_us.length).filter((sample) => Number.isFinite(sample));
  if (after.length === 0) return 1;
  return Math.min(1, Math.max(0, mean(after) / value[row + peakTimeIndex]));
}

function shareWithin(share: number): number {
  return Number.isFinite(share) ? Math.min(0.9, Math.max(0.01, share)) : 0.1;
}

/** A rise within one step of time, or none, says nothing: the other traces' median stands in. */
function withUsableRises(signals: Signal[], step_us: number): Signal[] {
  const usable = signals.filter(({ rise_us }) => rise_us >= step_us);
  const rise_us = usable.length === 0 ? 2 * step_us : median(usable.map((signal) => signal.rise_us));
  // One ratio for all: a plateau's correlations exist together when they differ by their time scale only.
  const halfWayRatio = usable.length === 0 ? 2 : median(usable.map((signal) => signal.halfWayRatio));
  return signals.map((signal) => ({ ...signal, rise_us: signal.rise_us >= step_us ? signal.rise_us : rise_us, halfWayRatio }));
}

function traceOfPairs({ traces }: SelfTestInput, count: number): Int32Array {
  const traceOf = new Int32Array(count).fill(-1);
  traces.distances.forEach((_, q) => {
    for (const pair of traces.pairs.subarray(traces.offsets[q], traces.offsets[q + 1])) traceOf[pair] = q;
  });
  return traceOf;
}

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
  return shapeOf((field) => mean(members.map((signal) => signal[field])));
}

function blend(left: SignalShape, right: SignalShape, share: number): SignalShape {
  return shapeOf((field) => left[field] + share * (right[field] - left[field]));
}

function shapeOf(value: (field: keyof SignalShape) => number): SignalShape {
  return {
    amplitude: value("amplitude"),
    levelShare: value("levelShare"),
    rise_us: value("rise_us"),
    tailShare: value("tailShare"),
    halfWayRatio: value("halfWayRatio"),
  };
}
