"use client";

import { useRouter } from "next/navigation";
import { useState } from "react";
import { AlertDialog } from "radix-ui";
import { sendJson } from "@/components/data/fetch-json";

interface RemoveRunProps {
  runId: string;
  title: string;
  dependents: { archives: number; detections: number; analyses: number };
}

/** Removes a run after saying what goes with it. */
export function RemoveRun({ runId, title, dependents }: RemoveRunProps) {
  const router = useRouter();
  const [open, setOpen] = useState(false);
  const [error, setError] = useState<string | null>(null);

  async function remove() {
    try {
      await sendJson("DELETE", `/api/v1/runs/${runId}`);
      router.push("/runs");
      router.refresh();
    } catch (reason) {
      setError(reason instanceof Error ? reason.message : "The run was not removed.");
    }
  }

  return (
    <AlertDialog.Root open={open} onOpenChange={setOpen}>
      <AlertDialog.Trigger className="button button-quiet text-muted">Remove run…</AlertDialog.Trigger>
      <AlertDialog.Portal>
        <AlertDialog.Overlay className="fixed inset-0 z-20 bg-ink/35" />
        <AlertDialog.Content className="fixed inset-x-3 top-[20vh] z-30 mx-auto max-w-lg border border-rule bg-paper p-6">
          <AlertDialog.Title asChild>
            <h2>Remove “{title}”?</h2>
          </AlertDialog.Title>
          <AlertDialog.Description className="mt-2 text-muted">
            {counted(dependents.archives, "archive")}, {counted(dependents.detections, "detection")} and {counted(dependents.analyses, "analysis", "analyses")} go with it. This cannot be undone.
          </AlertDialog.Description>
          {error && (
            <p role="alert" className="notice notice-error mt-3">
              {error}
            </p>
          )}
          <div className="mt-5 flex justify-end gap-3">
            <AlertDialog.Cancel className="button">Keep it</AlertDialog.Cancel>
            <button type="button" className="button button-primary" onClick={remove}>
              Remove run and data
            </button>
          </div>
        </AlertDialog.Content>
      </AlertDialog.Portal>
    </AlertDialog.Root>
  );
}

function counted(count: number, one: string, many = `${one}s`): string {
  return `${count} ${count === 1 ? one : many}`;
}
