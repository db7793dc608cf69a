import { z } from "zod";

const ThresholdField = z.number().min(-1e6).max(1e6);

export const CreateDetectionInput = z
  .strictObject({
    method: z.enum(["fixed", "mixture", "calibration"]),
    threshold: ThresholdField.optional().meta({ description: "One for all sites; bright means more counts than this" }),
    thresholds: z.array(ThresholdField).min(1).max(4096).optional().meta({ description: "One per site" }),
    model: z.enum(["auto", "poisson", "leakage", "negative-binomial"]).default("auto").meta({ description: "What a mixture's components follow; auto lets BIC choose" }),
    thresholdScope: z.enum(["site", "common"]).default("site").meta({ description: "Advised thresholds by site, or one for all with the least mean error" }),
    label: z.string().trim().max(120).optional(),
  })
  .refine((input) => input.threshold === undefined || input.thresholds === undefined, { path: ["thresholds"], message: "give either threshold or thresholds, not both" });
export type CreateDetectionInput = z.output<typeof CreateDetectionInput>;
