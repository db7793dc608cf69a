import type { detections } from "@/db/schema/detections";

export type DetectionRow = typeof detections.$inferSelect;

/** A detection as the API shows it; arrays are `[site]`. */
export function showDetection(row: DetectionRow, createdBy: string, currentVersion: number) {
  return {
    id: row.id,
    runId: row.runId,
    number: row.number,
    runVersion: row.runVersion,
    /** The run has been read anew since. */
    stale: row.runVersion !== currentVersion,
    method: row.method,
    label: row.label,
    thresholds: row.sites.map(({ threshold }) => threshold),
    falseBright: row.sites.map(({ falseBright }) => falseBright),
    falseDark: row.sites.map(({ falseDark }) => falseDark),
    falseBrightInterval: row.sites.map(({ falseBrightInterval }) => falseBrightInterval),
    falseDarkInterval: row.sites.map(({ falseDarkInterval }) => falseDarkInterval),
    fidelity: row.sites.map(({ fidelity }) => fidelity),
    mixture: row.sites.map(({ mixture }) => mixture),
    model: row.model,
    warnings: row.sites.map(({ warnings }) => warnings),
    createdBy,
    createdAt: row.createdAt.toISOString(),
  };
}
export type ShownDetection = ReturnType<typeof showDetection>;
