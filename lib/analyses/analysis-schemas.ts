import { z } from "zod";
import { Id } from "@/lib/http/id-params";
import { DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";

const Site = z.number().int().min(0).max(4095);

const Bootstrap = z.strictObject({
  replicates: z.number().int().min(50).max(20_000).default(1000),
  /** The same default for everybody: a result is the same bytes again without writing anything down. */
  seed: z.number().int().min(0).max(Number.MAX_SAFE_INTEGER).default(1),
  interval: z.enum(["percentile", "basic", "bca"]).default("percentile"),
  blockLength: z.number().int().min(1).max(100_000).default(1),
});

const Traces = z.discriminatedUnion("kind", [
  z.strictObject({ kind: z.literal("reference"), site: Site.default(0) }),
  z.strictObject({ kind: z.literal("distance"), bulk: z.array(Site).min(2).max(4096).optional() }),
]);

const Front = z
  .strictObject({
    rule: z.enum(["fraction-of-max", "fixed-level", "noise-multiple"]).default(DEFAULT_FRONT_RULE.rule),
    level: z.number().positive().max(100).default(DEFAULT_FRONT_RULE.level),
    method: z.enum(["isotonic", "first", "last-upcrossing"]).default(DEFAULT_FRONT_RULE.method),
    hold: z.number().int().min(1).max(100).default(DEFAULT_FRONT_RULE.hold),
    minSignal: z.number().min(0).max(1000).default(DEFAULT_FRONT_RULE.minSignal),
    absolute: z.boolean().default(DEFAULT_FRONT_RULE.absolute),
    throughOrigin: z.boolean().default(false),
    powerLawIn: z.enum(["log-time", "time"]).default("log-time"),
    covariance: z.enum(["diagonal", "bootstrap"]).default("diagonal"),
  })
  .refine((front) => front.rule === "noise-multiple" || front.level < 1, { path: ["level"], message: "must be below 1 for this rule" });

/** Every field but `detectionId` has the default of the definitions. */
export const CreateAnalysisInput = z.strictObject({
  detectionId: Id,
  readoutCorrection: z.boolean().default(false),
  estimator: z.enum(["plug-in", "unbiased"]).default("plug-in"),
  reading: z.enum(["threshold", "threshold-free"]).default("threshold"),
  bootstrap: Bootstrap.prefault({}),
  traces: Traces.prefault({ kind: "reference" }),
  front: Front.prefault({}),
  label: z.string().trim().max(120).optional(),
});
export type CreateAnalysisInput = z.output<typeof CreateAnalysisInput>;
