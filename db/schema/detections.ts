import { index, int, mysqlEnum, mysqlTable, uniqueIndex, varchar } from "drizzle-orm/mysql-core";
import { id, jsonText, moment } from "./columns";
import { groups } from "./groups";
import { runs } from "./runs";
import { users } from "./users";

/** What richer models fit besides: chances to leak per count of signal, variance beyond Poisson in units of mean². */
interface CountModelExtras {
  leakDark?: number;
  leakBright?: number;
  darkExcess?: number;
  brightExcess?: number;
}

/** One site of a saved detection; null where the method cannot tell. */
export interface DetectionSite {
  site: number;
  threshold: number;
  falseBright: number | null;
  falseDark: number | null;
  falseBrightInterval: [number, number] | null;
  falseDarkInterval: [number, number] | null;
  fidelity: number | null;
  /** What the ε's rest on, for their own uncertainty: Beta(x + ½, K − x + ½) per rate. */
  evidence: { dark: { errors: number; shots: number }; bright: { errors: number; shots: number } } | null;
  /** Fitted components with the standard errors of their rates, when a mixture was fitted; detections from before they were kept have none. */
  mixture: { dark: number; bright: number; brightWeight: number; darkError?: number; brightError?: number } & CountModelExtras | null;
  warnings: { code: string; message: string }[];
}

/** What the counts of a bright and of a dark site are taken to follow. */
export type DetectionModelName = "poisson" | "leakage" | "negative-binomial";

/** The model behind a detection's error rates, and why it was taken. */
export interface DetectionModel {
  name: DetectionModelName;
  chosen: "bic" | "by-hand";
  /** BIC summed over the fitted sites, of each model that was tried; the least is best. */
  bic: { name: DetectionModelName; value: number }[];
  /** One plain sentence. */
  reason: string;
}

/** A saved set of thresholds; never edited, only superseded by a higher number. */
export const detections = mysqlTable(
  "detections",
  {
    id: id().primaryKey(),
    groupId: id().notNull().references(() => groups.id),
    runId: id().notNull().references(() => runs.id),
    runVersion: int().notNull(),
    number: int().notNull(),
    method: mysqlEnum(["fixed", "mixture", "calibration"]).notNull(),
    label: varchar({ length: 120 }),
    sites: jsonText<DetectionSite[]>()().notNull(),
    /** Null when no mixture was fitted. */
    model: jsonText<DetectionModel>()(),
    createdBy: id().notNull().references(() => users.id),
    createdAt: moment().notNull(),
  },
  (table) => [
    uniqueIndex("detections_numbered").on(table.runId, table.number),
    /** A group's detection by id is the primary key; this one lists a run's. */
    index("detections_by_run").on(table.groupId, table.runId),
  ],
);
