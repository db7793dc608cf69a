import { z } from "zod";

const Seed = z.number().int().min(0).max(Number.MAX_SAFE_INTEGER).default(1);
const FEWEST_REPEATS = 20;
const MOST_REPEATS = 1000;

/** What can be asked about a finished analysis. */
export const CreateStudyInput = z.discriminatedUnion("kind", [
  z.strictObject({ kind: z.literal("sweep") }),
  z.strictObject({
    kind: z.literal("null-front"),
    /** Default: the run's own, or xy where that is neither. */
    model: z.enum(["xy", "ising"]).optional(),
    /** Default: the run's own; null matches J to the observed front. */
    jMaxHz: z.number().positive().max(1e9).nullable().optional(),
    repeats: z.number().int().min(FEWEST_REPEATS).max(MOST_REPEATS).default(200),
    seed: Seed,
  }),
  z.strictObject({ kind: z.literal("self-test"), repeats: z.number().int().min(FEWEST_REPEATS).max(MOST_REPEATS).default(100), seed: Seed }),
]);
export type CreateStudyInput = z.output<typeof CreateStudyInput>;
