"use client";

import { byteCount } from "@/lib/number-text";
import type { ArchiveRole } from "./send-archive";
import type { PendingFile } from "./use-uploads";

interface PendingFileListProps {
  files: PendingFile[];
  onChange: (files: PendingFile[]) => void;
  disabled: boolean;
}

const ROLES: { value: ArchiveRole; name: string }[] = [
  { value: "shots", name: "shots" },
  { value: "calibration-dark", name: "calibration, all dark" },
  { value: "calibration-bright", name: "calibration, all bright" },
];

/** The files to be sent, each with its role; NPY files also need their evolution times. */
export function PendingFileList({ files, onChange, disabled }: PendingFileListProps) {
  const change = (index: number, part: Partial<PendingFile>) =>
    onChange(files.map((pending, q) => (q === index ? { ...pending, ...part } : pending)));
  return (
    <ul className="divide-y divide-hairline border-b border-hairline">
      {files.map((pending, index) => (
        <li key={`${pending.file.name} ${index}`} className="py-2">
          <div className="flex flex-wrap items-center gap-x-4 gap-y-1">
            <span className="min-w-0 grow basis-40 font-[550] break-words">
              {pending.file.name} <span className="label figures whitespace-nowrap">{byteCount(pending.file.size)}</span>
            </span>
            <select
              aria-label={`Role of ${pending.file.name}`}
              className="field w-auto"
              value={pending.role}
              disabled={disabled}
              onChange={(event) => change(index, { role: event.target.value as ArchiveRole })}
            >
              {ROLES.map((role) => (
                <option key={role.value} value={role.value}>
                  {role.name}
                </option>
              ))}
            </select>
            <button type="button" className="button button-quiet" disabled={disabled} onClick={() => onChange(files.filter((_, q) => q !== index))}>
              Remove
            </button>
          </div>
          {pending.role === "shots" && /\.npy(\.gz)?$/i.test(pending.file.name) && (
            <label className="mt-1 block">
              <span className="label">Evolution times in µs, separated by commas (an NPY file holds none)</span>
              <input className="field figures" required value={pending.times_us} disabled={disabled} onChange={(event) => change(index, { times_us: event.target.value })} />
            </label>
          )}
        </li>
      ))}
    </ul>
  );
}
