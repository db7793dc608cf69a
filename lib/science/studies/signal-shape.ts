/** A smooth signal of one trace or pair, whose crossing of the level is the front. */
export interface Signal extends SignalShape {
  /** Where the signal reaches its level. */
  front_us: number;
}

/** What a signal's form takes from the run, apart from the time of its front. */
export interface SignalShape {
  /** Signed. */
  amplitude: number;
  /** The level as a share of the amplitude. */
  levelShare: number;
  /** From the front to the maximum. */
  rise_us: number;
  /** What is left of the amplitude long after the maximum. */
  tailShare: number;
  /** (later time)/(front time) at which the signal has come half-way from its level to its maximum. */
  halfWayRatio: number;
}

/** Returns the share of its amplitude that half-way from the level to the maximum is. */
export function halfWayShare(levelShare: number): number {
  return (1 + levelShare) / 2;
}

/** Returns the rise time of a swing that goes from its level to half-way in `half_us`. */
export function riseOfSwing(half_us: number, levelShare: number): number {
  const start = phaseOf(levelShare);
  return (half_us * (1 - start)) / (phaseOf(halfWayShare(levelShare)) - start);
}

/** Where the swing (1 − cos πφ)/2 has come to a share of its maximum. */
function phaseOf(share: number): number {
  return Math.acos(1 - 2 * share) / Math.PI;
}

/** Returns a signal that swings up to its maximum and down to its tail, zero before. */
export function swingAt({ amplitude, levelShare, front_us, rise_us, tailShare }: Signal, time_us: number): number {
  const start = phaseOf(levelShare);
  const phase = start + ((1 - start) * (time_us - front_us)) / rise_us;
  if (phase <= 0) return 0;
  const swing = (1 - Math.cos(Math.PI * Math.min(2, phase))) / 2;
  return amplitude * (phase <= 1 ? swing : tailShare + (1 - tailShare) * swing);
}

const MOST_STEPS = 50;
/** A power γp up to 2 makes exp(−(d/l)^γp), which is positive definite in distance, so that spins with these correlations exist. */
const LARGEST_POWER = 2;

/**
 * Returns a signal that rises for good, amplitude · s^((t/τ)^−p)/s_end: at the front it is the level, at `end_us` the
 * amplitude. The power p follows from `halfWayRatio`, at most 2/γ.
 */
export function plateauOf({ amplitude, levelShare, front_us, halfWayRatio }: Signal, end_us: number, gamma: number): (time_us: number) => number {
  let power = LARGEST_POWER / gamma;
  let atEnd = 1;
  for (let step = 0; step < MOST_STEPS; step++) {
    const ratio = Math.log(levelShare * atEnd) / Math.log(halfWayShare(levelShare) * atEnd);
    power = Math.min(LARGEST_POWER / gamma, Math.log(ratio) / Math.log(halfWayRatio));
    atEnd = (levelShare * atEnd) ** ((end_us / front_us) ** -power);
  }
  const share = levelShare * atEnd;
  return (time_us) => (time_us > 0 ? (amplitude / atEnd) * share ** ((time_us / front_us) ** -power) : 0);
}
