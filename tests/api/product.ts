import { readFileSync } from "node:fs";
import path from "node:path";
import { callJson, type Credentials } from "./client";

export interface JobBody {
  id: string;
  state: string;
  error: { status: number; detail: string; errors?: { where: string; message: string }[] } | null;
  result: Record<string, unknown> | null;
}

export interface UploadBody {
  archives: { id: string; filename: string; bytes: number; sha256: string }[];
  job: { id: string } | null;
  duplicate: boolean;
}

const POLL_MS = 60;
const PATIENCE_MS = 90_000;

/** Returns the bytes of a file under tests/fixtures. */
export function fixture(name: string): Uint8Array<ArrayBuffer> {
  return new Uint8Array(readFileSync(path.join("tests/fixtures", name)));
}

/** Waits for a job's final state. */
export async function jobEnd(as: Credentials, jobId: string): Promise<JobBody> {
  const deadline = Date.now() + PATIENCE_MS;
  for (;;) {
    const job = await callJson<JobBody>("GET", `/api/v1/jobs/${jobId}`, { as });
    if (["done", "failed", "cancelled"].includes(job.state)) return job;
    if (Date.now() > deadline) throw new Error(`job ${jobId} is still ${job.state}`);
    await new Promise((resolve) => setTimeout(resolve, POLL_MS));
  }
}

/** Makes a run and returns its id. */
export async function makeRun(as: Credentials, fields: Record<string, unknown> = {}): Promise<string> {
  return (await callJson<{ id: string }>("POST", "/api/v1/runs", { as, json: { title: "A night", ...fields } })).id;
}

/** Sends bytes as a raw body. */
export function upload(as: Credentials, runId: string, filename: string, bytes: Uint8Array<ArrayBuffer>, query: Record<string, string> = {}): Promise<UploadBody> {
  return callJson("POST", `/api/v1/runs/${runId}/archives?${new URLSearchParams({ filename, ...query })}`, { as, body: bytes });
}

/** Sends an archive and waits until it is read. */
export async function uploadAndRead(as: Credentials, runId: string, filename: string, bytes: Uint8Array<ArrayBuffer>, query: Record<string, string> = {}): Promise<JobBody> {
  const { job } = await upload(as, runId, filename, bytes, query);
  if (!job) throw new Error("the upload started no job");
  return jobEnd(as, job.id);
}

export interface DetectionBody {
  id: string;
  number: number;
  thresholds: number[];
  falseBright: (number | null)[];
  falseDark: (number | null)[];
  fidelity: (number | null)[];
  mixture: ({ dark: number; bright: number; brightWeight: number } | null)[];
  warnings: { code: string; message: string }[][];
}

export function makeDetection(as: Credentials, runId: string, json: Record<string, unknown>): Promise<DetectionBody> {
  return callJson("POST", `/api/v1/runs/${runId}/detections`, { as, json });
}

/** Starts an analysis, waits for its end and returns its id. */
export async function analyse(as: Credentials, runId: string, json: Record<string, unknown>): Promise<string> {
  const started = await callJson<{ analysis: { id: string }; job: { id: string } }>("POST", `/api/v1/runs/${runId}/analyses`, { as, json });
  const job = await jobEnd(as, started.job.id);
  if (job.state !== "done") throw new Error(`the analysis ended ${job.state}: ${job.error?.detail}`);
  return started.analysis.id;
}
