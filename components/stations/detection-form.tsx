"use client";

import { useRouter } from "next/navigation";
import { useState, type FormEvent, type ReactNode } from "react";
import { ApiProblem, sendJson } from "@/components/data/fetch-json";
import { ChoiceField } from "@/components/forms/choice-field";
import { FormField } from "@/components/forms/form-field";
import { ProblemNotice } from "@/components/shell/problem-notice";
import type { ProblemPlace } from "@/lib/problem";
import type { DetectionAnswer } from "./detection-types";

interface DetectionFormProps {
  runId: string;
  sites: number;
  hasCalibration: boolean;
  latest: DetectionAnswer | null;
}

type Method = DetectionAnswer["method"];

const EXPLANATIONS: Record<Method, string> = {
  mixture: "Two components are fitted to each site’s counts; the threshold is the half-integer with the least ε_d + ε_b.",
  calibration: "Error rates are counted in the calibration shots, with Clopper–Pearson intervals.",
  fixed: "The thresholds are yours. Error rates come from calibration shots when there are any, else from the mixture.",
};

const MODELS = [
  ["auto", "chosen by BIC"],
  ["poisson", "Poisson"],
  ["leakage", "Poisson with leakage in the window"],
  ["negative-binomial", "negative binomial (gain noise)"],
] as const;
const SCOPES = [
  ["site", "each site its own"],
  ["common", "one for all sites"],
] as const;

/** Saves the next numbered detection; one saved is never edited. */
export function DetectionForm({ runId, sites, hasCalibration, latest }: DetectionFormProps) {
  const router = useRouter();
  const [method, setMethod] = useState<Method>(hasCalibration ? "calibration" : "mixture");
  const [busy, setBusy] = useState(false);
  const [refusal, setRefusal] = useState<{ detail: string; errors: ProblemPlace[] } | null>(null);
  const atField = refusal?.errors.find((place) => place.where.startsWith("threshold"));

  async function save(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    setBusy(true);
    setRefusal(null);
    const form = new FormData(event.currentTarget);
    try {
      await sendJson("POST", `/api/v1/runs/${runId}/detections`, { method, ...modelFields(form), ...thresholdFields(form), ...labelField(form) });
      window.history.replaceState(null, "", window.location.pathname);
      router.refresh();
    } catch (error) {
      setRefusal(error instanceof ApiProblem ? { detail: error.message, errors: error.places } : { detail: "The server did not answer.", errors: [] });
    }
    setBusy(false);
  }

  return (
    <form onSubmit={save} className="space-y-4">
      <h2>{latest ? "New detection" : "First detection"}</h2>
      <fieldset disabled={busy}>
        <legend className="mb-1 font-[550]">Thresholds from</legend>
        <div className="space-y-1">
          <MethodChoice method="mixture" chosen={method} onChoose={setMethod}>the run’s own counts (mixture)</MethodChoice>
          <MethodChoice method="calibration" chosen={method} onChoose={setMethod} disabled={!hasCalibration}>
            calibration shots{!hasCalibration && " (none in this run)"}
          </MethodChoice>
          <MethodChoice method="fixed" chosen={method} onChoose={setMethod}>given values</MethodChoice>
        </div>
        <p className="label mt-2">{EXPLANATIONS[method]}</p>
      </fieldset>
      {method !== "calibration" && (
        <ChoiceField label="Components" name="model" choices={MODELS} hint="BIC takes a richer law only when it is clearly better." disabled={busy} />
      )}
      {method !== "fixed" && <ChoiceField label="Advised thresholds" name="thresholdScope" choices={SCOPES} disabled={busy} />}
      <FormField
        label="Given thresholds θ"
        name="thresholds"
        className="field figures"
        hint={`${method === "fixed" ? "" : "Optional. "}One for all sites, or ${sites} by commas. Bright means more than θ counts; 3.5 means four or more.`}
        required={method === "fixed"}
        disabled={busy}
        error={atField && `${placeText(atField.where)}${atField.message}`}
      />
      <FormField label="Label" name="label" hint="optional" maxLength={120} disabled={busy} />
      {refusal && !atField && <ProblemNotice title="Not saved" problem={refusal} />}
      <button type="submit" className="button button-primary" disabled={busy}>
        {busy ? "Saving…" : "Save detection"}
      </button>
    </form>
  );
}

interface MethodChoiceProps {
  method: Method;
  chosen: Method;
  onChoose: (method: Method) => void;
  disabled?: boolean;
  children: ReactNode;
}

function MethodChoice({ method, chosen, onChoose, disabled = false, children }: MethodChoiceProps) {
  return (
    <label className={`flex min-h-8 items-center gap-2 ${disabled ? "text-muted" : ""}`}>
      <input type="radio" name="method" className="size-4 accent-(--ink)" checked={chosen === method} disabled={disabled} onChange={() => onChoose(method)} />
      {children}
    </label>
  );
}

/** `thresholds[1]` is the second value typed. */
function placeText(where: string): string {
  const index = /\[(\d+)\]/.exec(where);
  return index ? `Value ${Number(index[1]) + 1} ` : "";
}

function modelFields(form: FormData): Record<string, string> {
  const chosen = ["model", "thresholdScope"].flatMap((name) => {
    const value = form.get(name);
    return typeof value === "string" ? [[name, value]] : [];
  });
  return Object.fromEntries(chosen);
}

function thresholdFields(form: FormData): { threshold?: number | string; thresholds?: (number | string)[] } {
  const text = String(form.get("thresholds") ?? "").trim();
  if (text === "") return {};
  const values = text.split(/[,;\s]+/).filter(Boolean).map((part) => (Number.isFinite(Number(part)) ? Number(part) : part));
  return values.length === 1 ? { threshold: values[0] } : { thresholds: values };
}

function labelField(form: FormData): { label?: string } {
  const label = String(form.get("label") ?? "").trim();
  return label === "" ? {} : { label };
}
