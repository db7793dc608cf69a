"use client";

import { useState, type ReactNode } from "react";
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
  const [open, setOpen] = useState(false);
  return (
    <div className="mb-4">
      <div className="flex flex-wrap items-center gap-x-5 gap-y-2">
        <AnalysisChoice analyses={analyses} shown={shown} />
        <p className="label figures min-w-0 grow basis-64 break-words">{provenance}</p>
        {detections && (
          <button type="button" className="button" aria-expanded={open} onClick={() => setOpen(!open)}>
            {open ? "Close" : "New analysis"}
          </button>
        )}
      </div>
      {open && detections && (
        <div className="mt-4 border-y border-hairline py-5">
          <AnalysisForm runId={runId} siteNames={siteNames} detections={detections} onStarted={() => setOpen(false)} />
        </div>
      )}
    </div>
  );
}
