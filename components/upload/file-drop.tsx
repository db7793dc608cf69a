"use client";

import { useId, useRef, useState, type DragEvent, type ReactNode } from "react";

interface FileDropProps {
  onFiles: (files: File[]) => void;
  children: ReactNode;
  disabled?: boolean;
}

/** A place to drop files on, or to press for the file dialogue. */
export function FileDrop({ onFiles, children, disabled = false }: FileDropProps) {
  const [over, setOver] = useState(false);
  const input = useRef<HTMLInputElement>(null);
  const id = useId();

  function onDrop(event: DragEvent) {
    event.preventDefault();
    event.stopPropagation();
    setOver(false);
    if (!disabled && event.dataTransfer.files.length > 0) onFiles([...event.dataTransfer.files]);
  }

  return (
    <div
      onDragOver={(event) => {
        event.preventDefault();
        setOver(true);
      }}
      onDragLeave={() => setOver(false)}
      onDrop={onDrop}
      className={`border border-dashed px-5 py-6 ${over ? "border-ink bg-well" : "border-rule"}`}
    >
      <label htmlFor={id} className="sr-only">
        Archive files
      </label>
      <input
        ref={input}
        id={id}
        type="file"
        multiple
        className="sr-only"
        disabled={disabled}
        onChange={(event) => {
          if (event.target.files && event.target.files.length > 0) onFiles([...event.target.files]);
          event.target.value = "";
        }}
      />
      {children}
      <button type="button" className="button mt-3" disabled={disabled} onClick={() => input.current?.click()}>
        Choose files
      </button>
    </div>
  );
}
