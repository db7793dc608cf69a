import { z } from "zod";

export const RoleField = z.enum(["shots", "calibration-dark", "calibration-bright"]);

/** Evolution times in µs as `?times_us=5,10,20`, for files that hold none. */
const TimesField = z
  .string()
  .transform((text, context): number[] => {
    const times = text.split(",").map((part) => (part.trim() === "" ? Number.NaN : Number(part)));
    const valid = times.every((time, k) => Number.isFinite(time) && time >= 0 && (k === 0 || time > times[k - 1]));
    if (valid) return times;
    context.addIssue({ code: "custom", message: "must be numbers from 0, strictly increasing, separated by commas" });
    return z.NEVER;
  })
  .optional();

export const UploadQuery = z.object({
  filename: z.string().max(1000).optional(),
  role: RoleField.default("shots"),
  times_us: TimesField,
});
export type UploadQuery = z.output<typeof UploadQuery>;
