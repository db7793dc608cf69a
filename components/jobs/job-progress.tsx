"use client";

import { useRouter } from "next/navigation";
import { useCallback, useState } from "react";
import { isFinal, type JobAnswer } from "@/components/data/api-types";
import { sendJson } from "@/components/data/fetch-json";
import { ProblemNotice } from "@/components/shell/problem-notice";
import { ProgressLine } from "./progress-line";
import { useJob } from "./use-job";

interface JobProgressProps {
  jobId: string;
  /** What is being done, such as "Reading the archive". */
  title: string;
  mayCancel: boolean;
}

/** A job under way: what is happening, how far, how long still, and a way to stop it. The page is read anew at the end. */
export function JobProgress({ jobId, title, mayCancel }: JobProgressProps) {
  const router = useRouter();
  const [cancelling, setCancelling] = useState(false);
  const refresh = useCallback((_job: JobAnswer) => router.refresh(), [router]);
  const { job, secondsLeft, interrupted } = useJob(jobId, refresh);

  async function cancel() {
    setCancelling(true);
    await sendJson("DELETE", `/api/v1/jobs/${jobId}`).catch(() => setCancelling(false));
  }

  if (job?.state === "failed") return <ProblemNotice title={`${title}: refused`} problem={job.error ?? null} />;
  if (job?.state === "cancelled") return <p className="notice">{title}: cancelled. Nothing was changed.</p>;
  return (
    <section aria-label={title} className="border-y border-hairline py-3">
      <ProgressLine title={title} stage={job?.stage ?? "waiting for a worker"} fraction={job?.progress ?? 0} secondsLeft={secondsLeft} />
      <div className="mt-1 flex items-center gap-4">
        {mayCancel && (!job || !isFinal(job)) && (
          <button type="button" className="button button-quiet -ml-2" onClick={cancel} disabled={cancelling}>
            {cancelling ? "Stopping…" : "Stop"}
          </button>
        )}
        {interrupted && <span className="label">The line to the server is down; trying again.</span>}
      </div>
    </section>
  );
}
