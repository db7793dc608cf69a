"use client";

import { useRouter } from "next/navigation";
import { useRef, useState, type FormEvent } from "react";
import { ApiProblem, sendJson } from "@/components/data/fetch-json";
import { FormField } from "@/components/forms/form-field";
import { ProblemNotice } from "@/components/shell/problem-notice";
import type { ProblemPlace } from "@/lib/problem";
import { FileDrop } from "./file-drop";
import { PendingFileList } from "./pending-file-list";
import { UploadStatus } from "./upload-status";
import { roleFromName, useUploads, type PendingFile } from "./use-uploads";

interface Refusal {
  detail: string;
  errors: ProblemPlace[];
}

/** Begins a run: what it is, its archives, and their way to the server. A refused file leaves the form as it was. */
export function NewRunForm({ initialFiles = [] }: { initialFiles?: File[] }) {
  const router = useRouter();
  const [files, setFiles] = useState<PendingFile[]>(() => initialFiles.map(asPending));
  const [title, setTitle] = useState(() => titleFrom(initialFiles));
  const [refusal, setRefusal] = useState<Refusal | null>(null);
  const [busy, setBusy] = useState(false);
  const runId = useRef<string | null>(null);
  const uploads = useUploads();

  function addFiles(added: File[]) {
    setFiles((before) => [...before, ...added.map(asPending)]);
    if (title === "") setTitle(titleFrom(added));
  }

  async function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    setBusy(true);
    setRefusal(null);
    const form = new FormData(event.currentTarget);
    try {
      runId.current = await saveRun(runId.current, runFields(form));
      const sent = await uploads.send(runId.current, files);
      if (sent) router.push(`/runs/${runId.current}/shots`);
      else setBusy(false);
    } catch (error) {
      setRefusal(refusalOf(error));
      setBusy(false);
    }
  }

  const errorAt = (where: string) => refusal?.errors.find((place) => place.where === where)?.message ?? null;
  return (
    <form onSubmit={submit} className="grid grid-cols-1 gap-x-10 gap-y-6 lg:grid-cols-[3fr_2fr]">
      <div className="min-w-0 space-y-3">
        <FileDrop onFiles={addFiles} disabled={busy}>
          <p className="font-[600]">Drop the night’s archives here</p>
          <p className="mt-1 max-w-[60ch] text-muted">
            CSV or TSV with one row a shot or one row a count, NPY or NPZ, each plain or gzipped. Several files are read as one run, in the order sent. Every file is kept as it is.
          </p>
        </FileDrop>
        <PendingFileList files={files} onChange={setFiles} disabled={busy} />
        <UploadStatus sending={uploads.sending} failure={uploads.failure} onStop={uploads.stop} />
        {refusal && <ProblemNotice title="The run was not created" problem={refusal} />}
        <button type="submit" className="button button-primary" disabled={busy || files.length === 0}>
          {busy ? "Sending…" : "Create the run and read it"}
        </button>
        {files.length === 0 && <span className="label ml-3">Choose at least one file.</span>}
      </div>
      <fieldset disabled={busy} className="min-w-0 space-y-4">
        <FormField label="Title" name="title" value={title} onChange={(event) => setTitle(event.target.value)} error={errorAt("title")} required maxLength={200} />
        <div className="grid grid-cols-2 gap-4">
          <label className="block">
            <span className="mb-1 block font-[550]">Model</span>
            <select name="model" className="field" defaultValue="xy">
              <option value="xy">XY</option>
              <option value="ising">Ising</option>
              <option value="other">other</option>
            </select>
          </label>
          <label className="block">
            <span className="mb-1 block font-[550]">A bright site is</span>
            <select name="brightIs" className="field" defaultValue="up">
              <option value="up">up (σ = +1)</option>
              <option value="down">down (σ = −1)</option>
            </select>
          </label>
          <FormField label="Largest J / 2π" hint="Hz, optional" name="jMaxHz" inputMode="decimal" error={errorAt("jMaxHz")} />
          <FormField label="α" hint="range of the interaction, optional" name="alpha" inputMode="decimal" error={errorAt("alpha")} />
        </div>
        <FormField label="Campaign" hint="optional; runs of one scan share it" name="campaign" maxLength={120} />
        <FormField
          label="Positions"
          hint="optional; x of each site in units of the mean spacing, by commas; for planes x y pairs by semicolons. Default 0, 1, 2 …"
          name="positions"
          error={errorAt("positions")}
        />
        <label className="block">
          <span className="mb-1 block font-[550]">Notes</span>
          <textarea name="notes" rows={3} className="field" maxLength={10_000} />
        </label>
      </fieldset>
    </form>
  );
}

async function saveRun(runId: string | null, fields: Record<string, unknown>): Promise<string> {
  if (runId) {
    await sendJson("PATCH", `/api/v1/runs/${runId}`, fields);
    return runId;
  }
  return (await sendJson<{ id: string }>("POST", "/api/v1/runs", fields)).id;
}

function runFields(form: FormData): Record<string, unknown> {
  const text = (name: string) => String(form.get(name) ?? "").trim();
  const optional = (name: string, value: unknown) => (text(name) === "" ? {} : { [name]: value });
  return {
    title: text("title"),
    model: text("model"),
    brightIs: text("brightIs"),
    ...optional("notes", text("notes")),
    ...optional("campaign", text("campaign")),
    ...optional("jMaxHz", numberOrText(text("jMaxHz"))),
    ...optional("alpha", numberOrText(text("alpha"))),
    ...optional("positions", positionsFrom(text("positions"))),
  };
}

/** What is not a number goes to the server as it was typed, so that the answer names the field. */
function numberOrText(text: string): number | string {
  const value = Number(text);
  return Number.isFinite(value) ? value : text;
}

function positionsFrom(text: string): (number | string)[] | (number | string)[][] {
  if (!text.includes(";")) return text.split(",").map((part) => numberOrText(part.trim()));
  return text.split(";").filter((pair) => pair.trim() !== "").map((pair) => pair.trim().split(/[\s,]+/).map(numberOrText));
}

function asPending(file: File): PendingFile {
  return { file, role: roleFromName(file.name), times_us: "" };
}

function titleFrom(files: File[]): string {
  const first = files[0]?.name ?? "";
  return first.replace(/\.(csv|tsv|txt|npy|npz)?(\.gz)?$/i, "").replace(/[_-]+/g, " ");
}

function refusalOf(error: unknown): Refusal {
  if (error instanceof ApiProblem) return { detail: error.message, errors: error.places };
  return { detail: error instanceof Error ? error.message : "The run could not be created.", errors: [] };
}
