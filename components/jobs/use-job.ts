"use client";

import { useEffect, useState } from "react";
import { isFinal, type JobAnswer } from "@/components/data/api-types";

export interface WatchedJob {
  job: JobAnswer | null;
  /** Seconds left at the pace so far; null until the pace is known. */
  secondsLeft: number | null;
  /** The line to the server is down; the browser tries again by itself. */
  interrupted: boolean;
}

const NOTHING: WatchedJob = { job: null, secondsLeft: null, interrupted: false };

/** Follows a job's server-sent events to its final state and calls `onFinal` once. */
export function useJob(jobId: string | null, onFinal?: (job: JobAnswer) => void): WatchedJob {
  const [watched, setWatched] = useState<{ id: string; state: WatchedJob } | null>(null);
  useEffect(() => {
    if (!jobId) return;
    const events = new EventSource(`/api/v1/jobs/${jobId}/events`);
    let start: { at_ms: number; progress: number } | null = null;
    events.addEventListener("progress", (event) => {
      const job = JSON.parse(event.data) as JobAnswer;
      if (!start && job.progress > 0) start = { at_ms: event.timeStamp, progress: job.progress };
      setWatched({ id: jobId, state: { job, secondsLeft: timeLeft(start, job.progress, event.timeStamp), interrupted: false } });
      if (!isFinal(job)) return;
      events.close();
      onFinal?.(job);
    });
    events.addEventListener("error", () => {
      setWatched((before) => (before?.id === jobId ? { id: jobId, state: { ...before.state, interrupted: true } } : before));
    });
    return () => events.close();
  }, [jobId, onFinal]);
  return watched && watched.id === jobId ? watched.state : NOTHING;
}

function timeLeft(start: { at_ms: number; progress: number } | null, progress: number, now_ms: number): number | null {
  if (!start || progress <= start.progress || now_ms - start.at_ms < 1000) return null;
  return ((1 - progress) * (now_ms - start.at_ms)) / (progress - start.progress) / 1000;
}
