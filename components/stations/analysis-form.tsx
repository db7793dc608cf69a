"use client";

import { useRouter } from "next/navigation";
import { useState, type FormEvent } from "react";
import { siteText } from "@/components/charts/site-text";
import { ApiProblem, sendJson } from "@/components/data/fetch-json";
import { ChoiceField } from "@/components/forms/choice-field";
import { FormField } from "@/components/forms/form-field";
import { ProblemNotice } from "@/components/shell/problem-notice";
import type { ProblemPlace } from "@/lib/problem";
import { analysisFields } from "./analysis-fields";
import { AnalysisMoreChoices } from "./analysis-more-choices";

const METHODS = [
  ["isotonic", "isotonic regression"],
  ["last-upcrossing", "last upcrossing before the maximum"],
  ["first", "first samples at the level"],
] as const;
const READINGS = [
  ["threshold", "thresholds"],
  ["threshold-free", "count distributions, no threshold"],
] as const;

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
        <ChoiceField
          label="Detection"
          value={detectionId}
          onChange={(event) => setDetectionId(event.target.value)}
          choices={detections.map(({ id, number, method, label }) => [id, [`detection ${number}`, method, label].filter(Boolean).join(" · ")])}
        />
        <ChoiceField
          label="Traces by"
          name="traces"
          defaultValue="0"
          choices={[["distance", "distance, averaged over pairs"], ...siteNames.map((name, site) => [String(site), `reference ${siteText(name)}`] as const)]}
        />
        <FormField label="Level f of the maximum" name="level" inputMode="decimal" defaultValue="0.1" error={errorAt("front.level")} />
        <ChoiceField label="Crossing by" name="method" choices={METHODS} />
        <ChoiceField label="Spins by" name="reading" choices={READINGS} error={errorAt("reading")} />
        <FormField label="Bootstrap replicates B" name="replicates" inputMode="numeric" defaultValue="1000" error={errorAt("bootstrap.replicates")} />
        <FormField label="Seed" name="seed" inputMode="numeric" defaultValue="1" error={errorAt("bootstrap.seed")} />
        <AnalysisMoreChoices errorAt={errorAt} />
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
