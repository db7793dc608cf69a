"use client";

import { useRouter } from "next/navigation";
import { useState, type FormEvent, type ReactNode } from "react";
import { ApiProblem, sendJson } from "@/components/data/fetch-json";
import { JobProgress } from "@/components/jobs/job-progress";
import { ProblemNotice } from "@/components/shell/problem-notice";
import type { ProblemPlace } from "@/lib/problem";
import type { StudyKindName, StudyView } from "./study-views";

interface StudyCardProps {
  title: string;
  /** One sentence: what is asked. */
  question: string;
  kind: StudyKindName;
  analysisId: string;
  view: StudyView<unknown>;
  /** What the button says; null when asking again would give the same answer. */
  button: string | null;
  mayStart: boolean;
  mayCancel: boolean;
  /** Fields of the form; they need not be touched. */
  settings?: ReactNode;
  /** Reads the form's fields into the request. */
  fieldsOf?: (form: FormData) => Record<string, unknown>;
  children: ReactNode;
}

/** One question about the analysis: asked by a button, followed while it runs, answered in a sentence. */
export function StudyCard({ title, question, kind, analysisId, view, button, mayStart, mayCancel, settings, fieldsOf, children }: StudyCardProps) {
  const router = useRouter();
  const [busy, setBusy] = useState(false);
  const [refusal, setRefusal] = useState<{ detail: string; errors: ProblemPlace[] } | null>(null);
  const { latest, done } = view;
  const underWay = latest !== null && (latest.job.state === "queued" || latest.job.state === "running");

  async function start(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    setBusy(true);
    setRefusal(null);
    try {
      await sendJson("POST", `/api/v1/analyses/${analysisId}/studies`, { kind, ...fieldsOf?.(new FormData(event.currentTarget)) });
      router.refresh();
    } catch (error) {
      setRefusal(error instanceof ApiProblem ? { detail: error.message, errors: error.places } : { detail: "The server did not answer.", errors: [] });
    }
    setBusy(false);
  }

  return (
    <section className="min-w-0 border-t border-rule pt-3" aria-label={title}>
      <h3 className="text-[1rem] font-[640]">{title}</h3>
      <p className="label mt-0.5 max-w-[70ch]">{question}</p>
      {underWay && (
        <div className="mt-3">
          <JobProgress jobId={latest.job.id} title={title} mayCancel={mayCancel} />
        </div>
      )}
      {latest?.job.state === "failed" && (
        <div className="mt-3">
          <ProblemNotice title="No answer" problem={latest.job.error ?? null} />
        </div>
      )}
      {latest?.job.state === "cancelled" && <p className="notice mt-3">Stopped before it was done.</p>}
      {done !== null && <div className="mt-3">{children}</div>}
      {done === null && latest === null && !mayStart && <p className="mt-3 text-muted">Not asked yet. An analyst can ask.</p>}
      {mayStart && button !== null && !underWay && (
        <form onSubmit={start} className="mt-3">
          <fieldset disabled={busy}>
            {settings && (
              <details className="mb-3">
                <summary className="label cursor-pointer">How it is simulated</summary>
                <div className="mt-2 grid grid-cols-2 gap-3">{settings}</div>
              </details>
            )}
            <button type="submit" className="button" disabled={busy}>
              {busy ? "Starting…" : button}
            </button>
          </fieldset>
          {refusal && (
            <div className="mt-3">
              <ProblemNotice title="Not started" problem={refusal} />
            </div>
          )}
        </form>
      )}
    </section>
  );
}
