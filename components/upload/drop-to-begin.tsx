"use client";

import { useEffect, useState, type ReactNode } from "react";
import { Dialog } from "radix-ui";
import { NewRunForm } from "./new-run-form";

/** Files dropped anywhere on the page begin a run in a dialogue over it. */
export function DropToBegin({ children }: { children: ReactNode }) {
  const [files, setFiles] = useState<File[] | null>(null);
  const [over, setOver] = useState(false);

  useEffect(() => {
    const hasFiles = (event: DragEvent) => event.dataTransfer?.types.includes("Files") ?? false;
    const onOver = (event: DragEvent) => {
      if (!hasFiles(event)) return;
      event.preventDefault();
      setOver(true);
    };
    const onLeave = (event: DragEvent) => event.relatedTarget === null && setOver(false);
    const onDrop = (event: DragEvent) => {
      if (!hasFiles(event)) return;
      event.preventDefault();
      setOver(false);
      setFiles([...(event.dataTransfer?.files ?? [])]);
    };
    window.addEventListener("dragover", onOver);
    window.addEventListener("dragleave", onLeave);
    window.addEventListener("drop", onDrop);
    return () => {
      window.removeEventListener("dragover", onOver);
      window.removeEventListener("dragleave", onLeave);
      window.removeEventListener("drop", onDrop);
    };
  }, []);

  return (
    <>
      {children}
      {over && files === null && (
        <div className="pointer-events-none fixed inset-3 z-10 grid place-items-center border-2 border-dashed border-ink bg-paper/85">
          <p className="text-xl font-[600]">Drop to begin a run</p>
        </div>
      )}
      <Dialog.Root open={files !== null} onOpenChange={(open) => !open && setFiles(null)}>
        <Dialog.Portal>
          <Dialog.Overlay className="fixed inset-0 z-20 bg-ink/35" />
          <Dialog.Content
            aria-describedby={undefined}
            className="fixed inset-x-3 top-[4vh] z-30 mx-auto max-h-[92vh] max-w-5xl overflow-auto border border-rule bg-paper p-5 sm:p-7"
            onInteractOutside={(event) => event.preventDefault()}
          >
            <div className="mb-4 flex items-baseline justify-between">
              <Dialog.Title asChild>
                <h2>New run</h2>
              </Dialog.Title>
              <Dialog.Close className="button button-quiet">Close</Dialog.Close>
            </div>
            {files && <NewRunForm initialFiles={files} />}
          </Dialog.Content>
        </Dialog.Portal>
      </Dialog.Root>
    </>
  );
}
