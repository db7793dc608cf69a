import { JobProgress } from "@/components/jobs/job-progress";
import { plainNumber } from "@/lib/number-text";
import { RemoveRun } from "./remove-run";

interface RunHeadProps {
  run: {
    id: string;
    title: string;
    model: "ising" | "xy" | "other";
    alpha: number | null;
    jMaxHz: number | null;
    campaign: string | null;
    brightIs: "up" | "down";
    createdBy: string;
    createdAt: string;
  };
  /** Under way for this run. */
  jobs: { id: string; kind: "ingest" | "analysis" | "study" }[];
  mayCancel: boolean;
  mayDelete: boolean;
  dependents: { archives: number; detections: number; analyses: number };
}

const MODELS = { ising: "Ising", xy: "XY", other: null };
const JOB_TITLES = { ingest: "Reading the archives", analysis: "Analysing", study: "Studying the front" };

/** Title and facts of a run, and what is under way. */
export function RunHead({ run, jobs, mayCancel, mayDelete, dependents }: RunHeadProps) {
  const facts = [
    MODELS[run.model],
    run.alpha !== null && `α = ${plainNumber(run.alpha, 3)}`,
    run.jMaxHz !== null && `J/2π ≤ ${plainNumber(run.jMaxHz, 4)} Hz`,
    `bright is ${run.brightIs}`,
    run.campaign,
    `${run.createdBy}, ${run.createdAt.slice(0, 10)}`,
  ].filter(Boolean);
  return (
    <>
      <div className="flex flex-wrap items-start justify-between gap-x-6 gap-y-1">
        <div className="min-w-0">
          <h1 className="break-words">{run.title}</h1>
          <p className="label figures mt-0.5">{facts.join("  ·  ")}</p>
        </div>
        {mayDelete && <RemoveRun runId={run.id} title={run.title} dependents={dependents} />}
      </div>
      {jobs.map((job) => (
        <div key={job.id} className="mt-3">
          <JobProgress jobId={job.id} title={JOB_TITLES[job.kind]} mayCancel={mayCancel} />
        </div>
      ))}
    </>
  );
}
