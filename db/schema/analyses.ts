import { index, int, mysqlTable, uniqueIndex, varchar } from "drizzle-orm/mysql-core";
import { id, jsonText, moment } from "./columns";
import { detections } from "./detections";
import { groups } from "./groups";
import { runs } from "./runs";
import { users } from "./users";
import type { VersionArchive } from "./run-versions";

/** What makes an analysis: with the same run version and detection it gives the same bytes again. */
export interface AnalysisParameters {
  detectionId: string;
  readoutCorrection: boolean;
  estimator: "plug-in" | "unbiased";
  /** How counts become spins: by thresholds, or weighted by the fitted count distributions without any. */
  reading: "threshold" | "threshold-free";
  /** `blockLength`: shots in a row that are resampled together, against drift; 1 resamples single shots. */
  bootstrap: { replicates: number; seed: number; interval: "percentile" | "basic" | "bca"; blockLength: number };
  traces: { kind: "reference"; site: number } | { kind: "distance"; bulk?: number[] };
  front: {
    rule: "fraction-of-max" | "fixed-level" | "noise-multiple";
    level: number;
    method: "isotonic" | "first" | "last-upcrossing";
    hold: number;
    minSignal: number;
    absolute: boolean;
    throughOrigin: boolean;
    powerLawIn: "log-time" | "time";
    /** Weights of the fits: each point's own error, or the joint covariance of all crossing times (generalised least squares). */
    covariance: "diagonal" | "bootstrap";
  };
}

export interface AnalysisProvenance {
  runVersion: number;
  archives: VersionArchive[];
  brightIs: "up" | "down";
  /** `[site][x]` or `[site][x, y]` */
  positions: number[][];
  detectionNumber: number;
  programVersion: string;
}

interface SummaryFigure {
  value: number | null;
  error: number | null;
  low: number | null;
  high: number | null;
}

/** Key figures for tables and strips; null where there is no fit. An `unbounded` interval has no upper end. */
export interface AnalysisSummary {
  verdict: string;
  verdictSentence: string;
  beta: (SummaryFigure & { unbounded: boolean }) | null;
  gamma: SummaryFigure | null;
  v_sites_per_ms: (SummaryFigure & { unbounded: boolean }) | null;
  resolvedPoints: number;
  points: number;
  warnings: string[];
}

export const analyses = mysqlTable(
  "analyses",
  {
    id: id().primaryKey(),
    groupId: id().notNull().references(() => groups.id),
    runId: id().notNull().references(() => runs.id),
    runVersion: int().notNull(),
    detectionId: id().notNull().references(() => detections.id),
    number: int().notNull(),
    label: varchar({ length: 120 }),
    parameters: jsonText<AnalysisParameters>()().notNull(),
    provenance: jsonText<AnalysisProvenance>()().notNull(),
    /** Null until the job is done; its state is the analysis's state. */
    summary: jsonText<AnalysisSummary>()(),
    jobId: id().notNull(),
    createdBy: id().notNull().references(() => users.id),
    createdAt: moment().notNull(),
    finishedAt: moment(),
  },
  (table) => [
    uniqueIndex("analyses_numbered").on(table.runId, table.number),
    /** Runs table and run page: the latest analyses of a group's runs. */
    index("analyses_by_run").on(table.groupId, table.runId),
  ],
);
