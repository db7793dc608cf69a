import type { FrontRule } from "@/lib/science/front/front-rule";

/** Work space of the crossing kernel for one trace of up to T samples; reused, so the bootstrap allocates nothing. */
export interface CrossingScratch {
  /** Usable samples held in `signal`, `time_us`, `weight`; times without a finite value are left out. */
  count: number;
  /** `[sample]`, the time index k of each usable sample. */
  timeIndex: Int32Array;
  time_us: Float64Array;
  signal: Float64Array;
  weight: Float64Array;
  /** Whether the last crossing found was a signal already at the level. */
  atStart: boolean;
  poolTime_us: Float64Array;
  poolSignal: Float64Array;
  poolWeight: Float64Array;
}

/** Returns work space for traces of `timeCount` samples. */
export function createCrossingScratch(timeCount: number): CrossingScratch {
  return {
    count: 0,
    timeIndex: new Int32Array(timeCount),
    time_us: new Float64Array(timeCount),
    signal: new Float64Array(timeCount),
    weight: new Float64Array(timeCount),
    atStart: false,
    poolTime_us: new Float64Array(timeCount),
    poolSignal: new Float64Array(timeCount),
    poolWeight: new Float64Array(timeCount),
  };
}

/**
 * Loads one trace into the scratch (mutated): `values[offset + k]` at `times_us[k]` with weight `shotsPerTime[k]`.
 * Values that are not finite, and times without kept shots, are left out.
 */
export function loadSignal(
  scratch: CrossingScratch,
  times_us: Float64Array,
  shotsPerTime: Float64Array,
  values: Float64Array,
  offset: number,
): void {
  const { signal, time_us, weight, timeIndex } = scratch;
  let count = 0;
  for (let k = 0; k < times_us.length; k++) {
    const value = values[offset + k];
    // The difference is zero for finite values only.
    if (value - value !== 0 || !(shotsPerTime[k] > 0)) continue;
    signal[count] = value;
    time_us[count] = times_us[k];
    weight[count] = shotsPerTime[k];
    timeIndex[count] = k;
    count += 1;
  }
  scratch.count = count;
}

/**
 * Loads a trace without gaps into a scratch that already holds the same times and weights; returns whether all values were finite.
 * The quick way for replicates: only the signal is written.
 */
export function reloadSignal(scratch: CrossingScratch, values: Float64Array, offset: number): boolean {
  const { signal, count } = scratch;
  let differences = 0;
  for (let k = 0; k < count; k++) {
    const value = values[offset + k];
    differences += value - value;
    signal[k] = value;
  }
  return differences === 0;
}

/**
 * Orients the loaded signal in place so that its largest |C| is positive (`absolute`: every sample is), and returns
 * the sample of that maximum, the first of equals; −1 when nothing is loaded.
 */
export function orientSignal(scratch: CrossingScratch, absolute: boolean): number {
  const { signal, count } = scratch;
  let peak = -1;
  let largest = -1;
  for (let k = 0; k < count; k++) {
    const size = Math.abs(signal[k]);
    if (size > largest) {
      largest = size;
      peak = k;
    }
  }
  if (absolute) {
    for (let k = 0; k < count; k++) signal[k] = Math.abs(signal[k]);
  } else if (peak >= 0 && signal[peak] < 0) {
    for (let k = 0; k < count; k++) signal[k] = -signal[k];
  }
  return peak;
}

/**
 * Returns the time in µs at which the oriented signal reaches `level`, NaN when it never does; sets
 * `scratch.atStart`. `peak` is the sample of the maximum.
 */
export function crossingTime_us(scratch: CrossingScratch, peak: number, level: number, rule: FrontRule): number {
  scratch.atStart = false;
  if (peak < 0 || !(scratch.signal[peak] > 0)) return NaN;
  if (rule.method === "isotonic") return isotonicCrossing_us(scratch, peak, level);
  return rule.method === "first" ? firstCrossing_us(scratch, level, rule.hold) : lastUpcrossing_us(scratch, peak, level);
}

/**
 * Centred isotonic regression (Oron & Flournoy, Stat. Biopharm. Res. 9, 258 (2017)) of samples 0 … peak: neighbours
 * that do not increase are pooled into their weighted mean, placed at their weighted mean time; straight lines between.
 */
function isotonicCrossing_us(scratch: CrossingScratch, peak: number, level: number): number {
  const pools = poolUntilIncreasing(scratch, peak);
  const { poolSignal, poolTime_us } = scratch;
  if (poolSignal[0] >= level) {
    scratch.atStart = true;
    return poolTime_us[0];
  }
  for (let p = 1; p < pools; p++) {
    if (poolSignal[p] >= level) {
      return between(poolTime_us[p - 1], poolSignal[p - 1], poolTime_us[p], poolSignal[p], level);
    }
  }
  return NaN;
}

/** Fills the scratch's pools from samples 0 … peak until strictly increasing from left to right; returns their number. */
export function poolUntilIncreasing(scratch: CrossingScratch, peak: number): number {
  const { signal, time_us, weight, poolSignal, poolTime_us, poolWeight } = scratch;
  let pools = 0;
  for (let k = 0; k <= peak; k++) {
    let value = signal[k];
    let time = time_us[k];
    let mass = weight[k];
    while (pools > 0 && poolSignal[pools - 1] >= value) {
      pools -= 1;
      const total = poolWeight[pools] + mass;
      value = (poolSignal[pools] * poolWeight[pools] + value * mass) / total;
      time = (poolTime_us[pools] * poolWeight[pools] + time * mass) / total;
      mass = total;
    }
    poolSignal[pools] = value;
    poolTime_us[pools] = time;
    poolWeight[pools] = mass;
    pools += 1;
  }
  return pools;
}

/** The first sample at the level whose `hold − 1` followers, where they exist, are at the level too. */
function firstCrossing_us(scratch: CrossingScratch, level: number, hold: number): number {
  const { signal, time_us, count } = scratch;
  let held = 0;
  for (let k = 0; k < count; k++) {
    held = signal[k] >= level ? held + 1 : 0;
    if (held < hold && !(held > 0 && k === count - 1)) continue;
    const first = k - held + 1;
    if (first === 0) {
      scratch.atStart = true;
      return time_us[0];
    }
    return between(time_us[first - 1], signal[first - 1], time_us[first], signal[first], level);
  }
  return NaN;
}

/** The last upward crossing of the level before the maximum; at the start when the signal is never below the level before it. */
function lastUpcrossing_us(scratch: CrossingScratch, peak: number, level: number): number {
  const { signal, time_us } = scratch;
  if (signal[peak] < level) return NaN;
  for (let k = peak - 1; k >= 0; k--) {
    if (signal[k] < level) return between(time_us[k], signal[k], time_us[k + 1], signal[k + 1], level);
  }
  scratch.atStart = true;
  return time_us[0];
}

function between(leftTime_us: number, left: number, rightTime_us: number, right: number, level: number): number {
  return leftTime_us + ((level - left) / (right - left)) * (rightTime_us - leftTime_us);
}
