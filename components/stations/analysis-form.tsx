"use client";

import { useRouter } from "next/navigation";
import { useState, type FormEvent } from "react";
import { siteText } from "@/components/charts/site-text";
import { ApiProblem, sendJson } from "@/components/data/fetch-json";
import { FormField } from "@/components/forms/form-field";
import { ProblemNotice } from "@/components/shell/problem-notice";
import type { ProblemPlace } from "@/lib/problem";

interface AnalysisFormProps {
  runId: string;
  siteNames: string[];
  /** Newest first. */
  detections: { id: string; number: number; method: string; label: string | null; hasRates: boolean }[];
  onStarted?: () => void;
}

/** Starts an analysis; every field has the default of the definitions. */
export function AnalysisForm({ runId, siteNames, detections, onStarted }: AnalysisFormProps) {
  const router = useRouter();
  const [busy, setBusy] = useState(false);
  const [detectionId, setDetectionId] = useState(detections[0]?.id ?? "");
  const [refusal, setRefusal] = useState<{ detail: string; errors: ProblemPlace[] } | null>(null);
  const detection = detections.find((candidate) => candidate.id === detectionId);

  async function start(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    setBusy(true);
    setRefusal(null);
    try {
      await sendJson("POST", `/api/v1/runs/${runId}/analyses`, analysisFields(new FormData(event.currentTarget), detectionId));
      onStarted?.();
      router.refresh();
    } catch (error) {
      setRefusal(error instanceof ApiProblem ? { detail: error.message, errors: error.places } : { detail: "The server did not answer.", errors: [] });
    }
    setBusy(false);
  }

  const errorAt = (where: string) => refusal?.errors.find((place) => place.where === where)?.message;
  return (
    <form onSubmit={start}>
      <fieldset disabled={busy} className="grid grid-cols-1 gap-4 sm:grid-cols-2 lg:grid-cols-4">
        <label>
          <span className="mb-1 block font-[550]">Detection</span>
          <select className="field" value={detectionId} onChange={(event) => setDetectionId(event.target.value)}>
            {detections.map((candidate) => (
              <option key={candidate.id} value={candidate.id}>
                {[`detection ${candidate.number}`, candidate.method, candidate.label].filter(Boolean).join(" · ")}
              </option>
            ))}
          </select>
        </label>
        <label>
          <span className="mb-1 block font-[550]">Traces by</span>
          <select name="traces" className="field" defaultValue="0">
            <option value="distance">distance, averaged over pairs</option>
            {siteNames.map((name, site) => (
              <option key={site} value={site}>
                reference {siteText(name)}
              </option>
            ))}
          </select>
        </label>
        <FormField label="Level f of the maximum" name="level" inputMode="decimal" defaultValue="0.1" error={errorAt("front.level")} />
        <label>
          <span className="mb-1 block font-[550]">Crossing by</span>
          <select name="method" className="field" defaultValue="isotonic">
            <option value="isotonic">isotonic regression</option>
            <option value="first">first samples at the level</option>
          </select>
        </label>
        <FormField label="Bootstrap replicates B" name="replicates" inputMode="numeric" defaultValue="1000" error={errorAt("bootstrap.replicates")} />
        <FormField label="Seed" name="seed" inputMode="numeric" defaultValue="1" error={errorAt("bootstrap.seed")} />
        <label>
          <span className="mb-1 block font-[550]">95 % intervals</span>
          <select name="interval" className="field" defaultValue="percentile">
            <option value="percentile">percentile</option>
            <option value="bca">BCa</option>
          </select>
        </label>
        <label>
          <span className="mb-1 block font-[550]">Estimator of C</span>
          <select name="estimator" className="field" defaultValue="plug-in">
            <option value="plug-in">plug-in</option>
            <option value="unbiased">unbiased, M/(M − 1)</option>
          </select>
        </label>
        <label className="flex min-h-9 items-center gap-2 sm:col-span-2">
          <input type="checkbox" name="readoutCorrection" className="size-4 accent-(--ink)" disabled={!detection?.hasRates} />
          correct for readout errors{!detection?.hasRates && " (this detection has no error rates)"}
        </label>
        <div className="flex items-center sm:col-span-2 lg:justify-end">
          <button type="submit" className="button button-primary" disabled={busy || detectionId === ""}>
            {busy ? "Starting…" : "Analyse"}
          </button>
        </div>
      </fieldset>
      {refusal && (
        <div className="mt-4">
          <ProblemNotice title="Not started" problem={refusal} />
        </div>
      )}
    </form>
  );
}

function analysisFields(form: FormData, detectionId: string): Record<string, unknown> {
  const text = (name: string) => String(form.get(name) ?? "").trim();
  const number = (name: string) => (Number.isFinite(Number(text(name))) && text(name) !== "" ? Number(text(name)) : text(name));
  return {
    detectionId,
    readoutCorrection: form.get("readoutCorrection") === "on",
    estimator: text("estimator"),
    bootstrap: { replicates: number("replicates"), seed: number("seed"), interval: text("interval") },
    traces: text("traces") === "distance" ? { kind: "distance" } : { kind: "reference", site: Number(text("traces")) },
    front: { level: number("level"), method: text("method") },
  };
}
