/**
 * What a random stream is drawn for: the last counter word of every stream, so that no two uses share draws under one
 * seed. A number once given keeps its meaning, else recorded seeds would give other results.
 */
export const RANDOM_PURPOSES = {
  /** The states of the generators that say which shots a bootstrap replicate holds; index is the time k. 1 is retired. */
  bootstrapShots: 10,
  /** The ε's of a bootstrap replicate; index is the site i. */
  readoutErrors: 2,
  /** Simulated runs. */
  simulation: 3,
  /** What completes a bootstrap replicate's byte draws to exactly M shots; index is the time k. */
  bootstrapRepairs: 4,
  /** The study of the estimates without thresholds; index is the row of its table, replicate the repeat. */
  thresholdFreeStudy: 5,
  /** Simulated repeats of the nearest-neighbour model; index is the time k, replicate the repeat. */
  nullFront: 6,
  /** Simulated repeats of an analysis; index is the time k, replicate the repeat. */
  selfTest: 7,
  /** The study of the coverage of intervals; index is the row of its table or the time k, replicate the repeat. */
  coverageStudy: 8,
  /** Where the runs of consecutive shots begin that a bootstrap replicate holds; index is the time k. */
  bootstrapRuns: 9,
} as const;

export type RandomPurpose = (typeof RANDOM_PURPOSES)[keyof typeof RANDOM_PURPOSES];
