"use client";

import { useRouter } from "next/navigation";
import { useState, type FormEvent } from "react";
import { FileDrop } from "@/components/upload/file-drop";
import { PendingFileList } from "@/components/upload/pending-file-list";
import { UploadStatus } from "@/components/upload/upload-status";
import { roleFromName, useUploads, type PendingFile } from "@/components/upload/use-uploads";

/** Further archives for the run: more shots of the same sites, or calibration shots. */
export function AddArchives({ runId, first }: { runId: string; first: boolean }) {
  const router = useRouter();
  const [files, setFiles] = useState<PendingFile[]>([]);
  const [told, setTold] = useState<string | null>(null);
  const uploads = useUploads();
  const busy = uploads.sending !== null;

  async function send(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    setTold(null);
    const sent = await uploads.send(runId, files);
    if (!sent) return;
    setFiles([]);
    if (sent.every((answer) => answer.duplicate)) setTold("These bytes are already part of this run; nothing was stored twice.");
    router.refresh();
  }

  return (
    <form onSubmit={send} className="space-y-3">
      <h2>{first ? "Add an archive" : "Add archives"}</h2>
      <FileDrop onFiles={(added) => setFiles([...files, ...added.map((file) => ({ file, role: roleFromName(file.name), times_us: "" }))])} disabled={busy}>
        <p className="text-muted">{first ? "Shots of this run, or its calibration shots." : "More shots of the same sites, or calibration shots. They make a new version; the present one stays as it is."}</p>
      </FileDrop>
      {files.length > 0 && <PendingFileList files={files} onChange={setFiles} disabled={busy} />}
      <UploadStatus sending={uploads.sending} failure={uploads.failure} onStop={uploads.stop} />
      {told && (
        <p className="label" role="status">
          {told}
        </p>
      )}
      {files.length > 0 && (
        <button type="submit" className="button button-primary" disabled={busy}>
          {busy ? "Sending…" : files.length === 1 ? "Send the file" : `Send ${files.length} files`}
        </button>
      )}
    </form>
  );
}
