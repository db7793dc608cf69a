import type { ReactNode } from "react";
import { AnalysisChoice } from "./analysis-choice";
import { AnalysisForm } from "./analysis-form";

interface AnalysisBarProps {
  runId: string;
  siteNames: string[];
  analyses: { number: number; label: string | null; text: string }[];
  shown: number;
  /** One line: what the shown analysis rests on. */
  provenance: ReactNode;
  /** Detections a new analysis can start from; null when the member may not start one. */
  detections: Parameters<typeof AnalysisForm>[0]["detections"] | null;
}

/** Which analysis is shown, what it rests on, and the way to another one. */
export function AnalysisBar({ runId, siteNames, analyses, shown, provenance, detections }: AnalysisBarProps) {
  return (
    <div className="mb-5">
      <div className="flex flex-wrap items-end gap-x-6 gap-y-2">
        <AnalysisChoice analyses={analyses} shown={shown} />
        <p className="label figures min-w-0 pb-1.5 break-words">{provenance}</p>
      </div>
      {detections && detections.length > 0 && (
        <details className="mt-2 border-b border-hairline pb-2">
          <summary className="cursor-pointer font-[550]">New analysis…</summary>
          <div className="mt-4 mb-3">
            <AnalysisForm runId={runId} siteNames={siteNames} detections={detections} />
          </div>
        </details>
      )}
    </div>
  );
}
