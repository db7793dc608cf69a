"use client";

import { useCallback, useRef, useState } from "react";
import type { ProblemAnswer } from "@/components/data/api-types";
import { sendArchive, SendRefused, type ArchiveRole, type SentArchives } from "./send-archive";

export interface PendingFile {
  file: File;
  role: ArchiveRole;
  /** Evolution times for files that hold none (NPY), as typed. */
  times_us: string;
}

export interface Sending {
  filename: string;
  sentBytes: number;
  bytes: number;
  secondsLeft: number | null;
}

export interface UploadFailure {
  filename: string;
  problem: Pick<ProblemAnswer, "detail" | "errors">;
}

/** Sends files one after another; stops at the first that is refused. */
export function useUploads() {
  const [sending, setSending] = useState<Sending | null>(null);
  const [failure, setFailure] = useState<UploadFailure | null>(null);
  const controller = useRef<AbortController | null>(null);

  const send = useCallback(async (runId: string, files: PendingFile[]): Promise<SentArchives[] | null> => {
    setFailure(null);
    const answers: SentArchives[] = [];
    for (const { file, role, times_us } of files) {
      controller.current = new AbortController();
      const started_ms = performance.now();
      const onProgress = (sentBytes: number) => {
        const elapsed_s = (performance.now() - started_ms) / 1000;
        const secondsLeft = elapsed_s > 1 && sentBytes > 0 ? (elapsed_s * (file.size - sentBytes)) / sentBytes : null;
        setSending({ filename: file.name, sentBytes, bytes: file.size, secondsLeft });
      };
      onProgress(0);
      try {
        answers.push(await sendArchive({ runId, file, role, times_us: times_us.trim() || undefined, onProgress, signal: controller.current.signal }));
      } catch (error) {
        setFailure({ filename: file.name, problem: problemOf(error) });
        setSending(null);
        return null;
      }
    }
    setSending(null);
    return answers;
  }, []);

  const stop = useCallback(() => controller.current?.abort(), []);
  return { sending, failure, send, stop };
}

function problemOf(error: unknown): Pick<ProblemAnswer, "detail" | "errors"> {
  if (error instanceof SendRefused && error.problem) return error.problem;
  return { detail: error instanceof Error ? error.message : "The upload failed.", errors: [] };
}

/** Returns the role a file's name speaks for; the member can change it. */
export function roleFromName(filename: string): ArchiveRole {
  if (/calib\w*[-_ ]?dark/i.test(filename)) return "calibration-dark";
  if (/calib\w*[-_ ]?bright/i.test(filename)) return "calibration-bright";
  return "shots";
}
