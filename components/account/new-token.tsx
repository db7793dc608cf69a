"use client";

import { useState, type FormEvent } from "react";
import { ApiProblem, sendJson } from "@/components/data/fetch-json";
import { FormField } from "@/components/forms/form-field";
import { ProblemNotice } from "@/components/shell/problem-notice";
import type { ProblemPlace } from "@/lib/problem";

const SCOPES = [
  { value: "read", text: "read: runs, results, archives" },
  { value: "upload", text: "upload: make runs, send archives" },
  { value: "analyse", text: "analyse: save detections, start analyses" },
];

/** Makes a token and shows its secret once. */
export function NewToken({ onMade }: { onMade: () => void }) {
  const [secret, setSecret] = useState<string | null>(null);
  const [copied, setCopied] = useState(false);
  const [busy, setBusy] = useState(false);
  const [refusal, setRefusal] = useState<{ detail: string; errors: ProblemPlace[] } | null>(null);

  async function make(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    const element = event.currentTarget;
    const form = new FormData(element);
    setBusy(true);
    setRefusal(null);
    try {
      const body = { name: form.get("name"), scopes: form.getAll("scopes"), expiresInDays: Number(form.get("expiresInDays")) };
      setSecret((await sendJson<{ token: string }>("POST", "/api/v1/tokens", body)).token);
      setCopied(false);
      element.reset();
      onMade();
    } catch (error) {
      setRefusal(error instanceof ApiProblem ? { detail: error.message, errors: error.places } : { detail: "The server did not answer.", errors: [] });
    }
    setBusy(false);
  }

  return (
    <form onSubmit={make} className="space-y-4">
      <h2>New token</h2>
      <FormField label="Name" name="name" hint="what uses it, such as the script’s name" required maxLength={120} />
      <fieldset>
        <legend className="mb-1 font-[550]">Scopes</legend>
        {SCOPES.map((scope) => (
          <label key={scope.value} className="flex min-h-8 items-center gap-2">
            <input type="checkbox" name="scopes" value={scope.value} defaultChecked={scope.value === "read"} className="size-4 accent-(--ink)" />
            {scope.text}
          </label>
        ))}
      </fieldset>
      <FormField label="Valid for" name="expiresInDays" type="number" min={1} max={366} defaultValue={90} hint="days, at most 366" required />
      {refusal && <ProblemNotice title="Not made" problem={refusal} />}
      <button type="submit" className="button button-primary" disabled={busy}>
        {busy ? "Making…" : "Make token"}
      </button>
      {secret && (
        <div className="notice" role="status">
          <p className="font-[600]">Copy it now; it is not shown again.</p>
          <p className="figures mt-1 break-all select-all">{secret}</p>
          <button
            type="button"
            className="button mt-2"
            onClick={() => navigator.clipboard.writeText(secret).then(() => setCopied(true), () => setCopied(false))}
          >
            {copied ? "Copied" : "Copy"}
          </button>
        </div>
      )}
    </form>
  );
}
