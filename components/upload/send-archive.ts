import type { ProblemAnswer } from "@/components/data/api-types";

export interface SentArchives {
  archives: { id: string; filename: string; bytes: number; sha256: string }[];
  job: { id: string } | null;
  duplicate?: boolean;
}

export type ArchiveRole = "shots" | "calibration-dark" | "calibration-bright";

interface SendOptions {
  runId: string;
  file: File;
  role: ArchiveRole;
  /** Evolution times for files that hold none (NPY), µs, as typed. */
  times_us?: string;
  onProgress: (sentBytes: number) => void;
  signal: AbortSignal;
}

/**
 * Sends one archive as a raw body and reports the bytes sent. Rejects with the server's problem, or with a plain Error
 * when the line breaks. XMLHttpRequest, because fetch tells nothing while sending.
 */
export function sendArchive({ runId, file, role, times_us, onProgress, signal }: SendOptions): Promise<SentArchives> {
  const query = new URLSearchParams({ filename: file.name, role });
  if (times_us) query.set("times_us", times_us);
  return new Promise((resolve, reject) => {
    const request = new XMLHttpRequest();
    request.open("POST", `/api/v1/runs/${runId}/archives?${query}`);
    request.setRequestHeader("content-type", "application/octet-stream");
    request.upload.onprogress = (event) => onProgress(event.loaded);
    request.onload = () => {
      const answer: unknown = parsed(request.responseText);
      if (request.status >= 200 && request.status < 300) resolve(answer as SentArchives);
      else reject(new SendRefused(answer as ProblemAnswer | null, request.status));
    };
    request.onerror = () => reject(new Error("The line broke before the server had everything. Nothing was kept; try again."));
    request.onabort = () => reject(new Error("Stopped. Nothing was kept."));
    signal.addEventListener("abort", () => request.abort(), { once: true });
    request.send(file);
  });
}

/** The server refused the archive; `problem` says where. */
export class SendRefused extends Error {
  readonly problem: ProblemAnswer | null;

  constructor(problem: ProblemAnswer | null, status: number) {
    super(problem?.detail ?? `The server answered ${status}.`);
    this.problem = problem;
  }
}

function parsed(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    return null;
  }
}
