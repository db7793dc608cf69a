"use client";

import { ProgressLine } from "@/components/jobs/progress-line";
import { ProblemNotice } from "@/components/shell/problem-notice";
import { byteCount } from "@/lib/number-text";
import type { Sending, UploadFailure } from "./use-uploads";

interface UploadStatusProps {
  sending: Sending | null;
  failure: UploadFailure | null;
  onStop: () => void;
}

/** Bytes on their way, or what was refused. */
export function UploadStatus({ sending, failure, onStop }: UploadStatusProps) {
  if (failure) return <ProblemNotice title={`${failure.filename} was not kept`} problem={failure.problem} />;
  if (!sending) return null;
  const waiting = sending.sentBytes >= sending.bytes;
  return (
    <div className="border-y border-hairline py-3">
      <ProgressLine
        title={`Sending ${sending.filename}`}
        stage={waiting ? "the server is making it durable" : `${byteCount(sending.sentBytes)} of ${byteCount(sending.bytes)}`}
        fraction={sending.bytes === 0 ? 1 : sending.sentBytes / sending.bytes}
        secondsLeft={sending.secondsLeft}
      />
      <button type="button" className="button button-quiet mt-1 -ml-2" onClick={onStop}>
        Stop
      </button>
    </div>
  );
}
