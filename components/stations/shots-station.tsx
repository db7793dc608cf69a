"use client";

import useSWR from "swr";
import { BrightnessChart } from "@/components/charts/brightness-chart";
import { fetchJson } from "@/components/data/fetch-json";
import { groupedCount, plainNumber } from "@/lib/number-text";
import { ArchiveTable, type ArchiveRow } from "./archive-table";
import { AddArchives } from "./add-archives";

/** The current version of a run, as the Shots station shows it. */
export interface ShotsView {
  runId: string;
  version: number;
  siteNames: string[];
  countType: "uint16" | "float32";
  times_us: number[];
  shotsPerTime: number[];
  shotsSetAside: Record<string, number>;
  calibrationDarkShots: number;
  calibrationBrightShots: number;
  warnings: { code: string; message: string }[];
}

interface ShotsStationProps {
  runId: string;
  notes: string;
  /** Null before the first archive has been read. */
  view: ShotsView | null;
  archives: ArchiveRow[];
  mayUpload: boolean;
  /** Archives are being read just now. */
  reading: boolean;
}

const REASONS: Record<string, string> = { missing: "a count was missing" };

/** What was read: shots per time, what was set aside and why, brightness by site and time, and the archives behind it. */
export function ShotsStation({ runId, notes, view, archives, mayUpload, reading }: ShotsStationProps) {
  return (
    <div className="grid grid-cols-1 gap-x-10 gap-y-8 xl:grid-cols-[1fr_24rem]">
      <div className="min-w-0 space-y-8">
        {view ? <Brightness view={view} /> : <p className="notice max-w-[60ch]">{nothingYet(archives, mayUpload, reading)}</p>}
        <ArchiveTable archives={archives} />
      </div>
      <aside className="min-w-0 space-y-7">
        {view && <KeptAndSetAside view={view} />}
        {notes && (
          <section>
            <h2>Notes</h2>
            <p className="mt-1 max-w-[60ch] break-words whitespace-pre-line text-muted">{notes}</p>
          </section>
        )}
        {mayUpload && <AddArchives runId={runId} first={view === null} />}
      </aside>
    </div>
  );
}

interface BrightnessAnswer {
  times_us: number[];
  /** `[k][site]` */
  brightness: number[][];
}

function Brightness({ view }: { view: ShotsView }) {
  const { data, error } = useSWR<BrightnessAnswer>(`/api/v1/runs/${view.runId}/brightness?version=${view.version}`, fetchJson);
  const height = Math.max(220, Math.min(520, 66 + 16 * view.siteNames.length));
  if (error) return <p role="alert" className="notice notice-error">{error instanceof Error ? error.message : "The brightness could not be read."}</p>;
  if (!data) return <div aria-busy="true" className="label" style={{ height: height + 54 }}>Reading the brightness…</div>;
  return (
    <BrightnessChart
      title="Brightness"
      caption="mean count of a site over the kept shots of a time"
      siteNames={view.siteNames}
      times_us={data.times_us}
      brightness={data.brightness}
      shotsPerTime={view.shotsPerTime}
      height={height}
    />
  );
}

function nothingYet(archives: ArchiveRow[], mayUpload: boolean, reading: boolean): string {
  if (reading) return "The archive is being read. What it holds is shown here by itself as soon as that is done.";
  if (archives.some(({ state }) => state === "refused")) {
    return `Nothing of this run could be read; the place is named below.${mayUpload ? " Mend the file and add it here: the refused one stays as it came." : ""}`;
  }
  return `No shots have been read yet. ${mayUpload ? "Add the first archive; what it holds is shown here as soon as it is read." : "A contributor adds the first archive."}`;
}

function KeptAndSetAside({ view }: { view: ShotsView }) {
  const kept = view.shotsPerTime.reduce((sum, shots) => sum + shots, 0);
  const reasons = Object.entries(view.shotsSetAside).filter(([, shots]) => shots > 0);
  const fewest = Math.min(...view.shotsPerTime);
  const most = Math.max(...view.shotsPerTime);
  return (
    <section>
      <h2>What was read</h2>
      <dl className="figures mt-1 grid grid-cols-[auto_1fr] gap-x-4 gap-y-1 [&>dd]:text-right [&>dt]:text-muted">
        <dt>Shots kept</dt>
        <dd>{groupedCount(kept)}</dd>
        <dt>Shots a time</dt>
        <dd>{fewest === most ? groupedCount(most) : `${groupedCount(fewest)} … ${groupedCount(most)}`}</dd>
        <dt>Evolution times</dt>
        <dd>
          {view.times_us.length} <span className="text-muted">from</span> {plainNumber(view.times_us[0], 6)} <span className="text-muted">to</span> {plainNumber(view.times_us[view.times_us.length - 1], 6)} µs
        </dd>
        <dt>Sites</dt>
        <dd>{view.siteNames.length}</dd>
        <dt>Counts</dt>
        <dd>{view.countType === "uint16" ? "whole" : "fractional (camera units)"}</dd>
        <dt>Calibration shots</dt>
        <dd>{view.calibrationDarkShots + view.calibrationBrightShots === 0 ? "none" : `${groupedCount(view.calibrationDarkShots)} dark, ${groupedCount(view.calibrationBrightShots)} bright`}</dd>
        <dt>Set aside</dt>
        <dd>{reasons.length === 0 ? "none" : reasons.map(([reason, shots]) => `${groupedCount(shots)}: ${REASONS[reason] ?? reason}`).join("; ")}</dd>
        <dt>Version</dt>
        <dd>{view.version}</dd>
      </dl>
      {view.warnings.length > 0 && (
        <ul className="mt-3 space-y-1 text-warning">
          {view.warnings.map((warning) => (
            <li key={warning.message}>{warning.message}</li>
          ))}
        </ul>
      )}
    </section>
  );
}
