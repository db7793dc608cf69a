import { z } from "zod";

const MOST_SITES = 256;
const Coordinate = z.number().min(-1e6).max(1e6);

/** x of each site, or [x, y] of each site, in units of the mean spacing. Kept as `[site][x]` or `[site][x, y]`. */
export const PositionsField = z
  .union([z.array(Coordinate).min(1).max(MOST_SITES), z.array(z.tuple([Coordinate, Coordinate])).min(1).max(MOST_SITES)])
  .transform((positions): number[][] => positions.map((position) => (typeof position === "number" ? [position] : position)))
  .refine((positions) => new Set(positions.map(String)).size === positions.length, "two sites may not share a position");

const TitleField = z.string().trim().min(1, "may not be empty").max(200);
const NotesField = z.string().max(10_000);
const CampaignField = z.string().trim().max(120);
export const BrightIsField = z.enum(["up", "down"]);
export const ModelField = z.enum(["ising", "xy", "other"]);

export const CreateRunInput = z.strictObject({
  title: TitleField,
  notes: NotesField.default(""),
  brightIs: BrightIsField.default("up"),
  model: ModelField.default("other"),
  positions: PositionsField.nullish(),
  jMaxHz: z.number().positive().max(1e9).nullish(),
  alpha: z.number().min(0).max(100).nullish(),
  campaign: CampaignField.nullish(),
});
export type CreateRunInput = z.output<typeof CreateRunInput>;

/** Metadata only. What `brightIs` and `positions` say is recorded with each analysis, so earlier ones stay what they were. */
export const UpdateRunInput = z
  .strictObject({
    title: TitleField,
    notes: NotesField,
    brightIs: BrightIsField,
    model: ModelField,
    positions: PositionsField.nullable(),
    jMaxHz: z.number().positive().max(1e9).nullable(),
    alpha: z.number().min(0).max(100).nullable(),
    campaign: CampaignField.nullable(),
  })
  .partial();
export type UpdateRunInput = z.output<typeof UpdateRunInput>;
