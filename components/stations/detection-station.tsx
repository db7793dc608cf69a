"use client";

import { useMemo } from "react";
import useSWR from "swr";
import { SiteHistogramChart } from "@/components/charts/site-histogram";
import { siteText } from "@/components/charts/site-text";
import type { SiteHistogram } from "@/components/charts/histogram-marks";
import { fetchJson } from "@/components/data/fetch-json";
import { useUrlState } from "@/components/shell/use-url-state";
import { DetectionForm } from "./detection-form";
import { DetectionTable } from "./detection-table";
import type { DetectionAnswer, HistogramsAnswer } from "./detection-types";

interface DetectionStationProps {
  runId: string;
  siteNames: string[];
  /** Newest first. */
  detections: DetectionAnswer[];
  mayCreate: boolean;
  hasCalibration: boolean;
}

/** From here on the small multiples are smaller. */
const MANY_SITES = 24;
const MOST_FREQUENT_SHARE = 0.9995;

/** Per-site histograms with thresholds and fitted components, the table of sites, and the way to the next detection. */
export function DetectionStation({ runId, siteNames, detections, mayCreate, hasCalibration }: DetectionStationProps) {
  const [chosen, choose] = useUrlState("detection", "");
  const [scale, setScale] = useUrlState("scale", "log");
  const detection = detections.find((candidate) => String(candidate.number) === chosen) ?? detections[0] ?? null;
  const { data, error } = useSWR<HistogramsAnswer>(`/api/v1/runs/${runId}/histograms`, fetchJson);
  const histograms = useMemo(() => siteHistograms(data, siteNames, detection), [data, siteNames, detection]);
  const lastCount = useMemo(() => lastDrawnCount(histograms), [histograms]);
  return (
    <div className="grid grid-cols-1 gap-x-10 gap-y-8 xl:grid-cols-[1fr_23rem]">
      <div className="min-w-0">
        <div className="mb-3 flex flex-wrap items-end gap-x-6 gap-y-2">
          {detections.length > 0 && (
            <label>
              <span className="label block">Shown</span>
              <select className="field w-auto" value={String(detection?.number ?? "")} onChange={(event) => choose(event.target.value)}>
                {detections.map((candidate) => (
                  <option key={candidate.id} value={String(candidate.number)}>
                    {nameOf(candidate)}
                  </option>
                ))}
              </select>
            </label>
          )}
          <label className="flex min-h-[2.2rem] items-center gap-2">
            <input type="checkbox" className="size-4 accent-(--ink)" checked={scale === "log"} onChange={(event) => setScale(event.target.checked ? "log" : "linear")} />
            logarithmic shots
          </label>
          <p className="label ml-auto self-center">
            <Swatch colour="var(--dark)" /> reads dark <Swatch colour="var(--bright)" /> reads bright; lines are the fitted components
          </p>
        </div>
        {detection?.stale && <p className="notice notice-warning mb-3">The run has newer shots than this detection was made on. Save a new one.</p>}
        {error && <p role="alert" className="notice notice-error">{error instanceof Error ? error.message : "The histograms could not be read."}</p>}
        <div className={`grid gap-y-2 ${siteNames.length > MANY_SITES ? "grid-cols-3 gap-x-3 sm:grid-cols-4 lg:grid-cols-8 2xl:grid-cols-10" : "grid-cols-2 gap-x-5 sm:grid-cols-3 lg:grid-cols-4 2xl:grid-cols-6"}`} aria-busy={!data}>
          {histograms.map((histogram) => (
            <SiteHistogramChart key={histogram.site} histogram={histogram} logarithmic={scale === "log"} lastCount={lastCount} height={siteNames.length > MANY_SITES ? 84 : 118} />
          ))}
        </div>
        {detection?.model && <p className="mt-4 max-w-[80ch] text-sm text-muted">{detection.model.reason}</p>}
        {detection && <DetectionTable detection={detection} siteNames={siteNames} />}
      </div>
      <aside className="min-w-0">
        {mayCreate ? (
          <DetectionForm runId={runId} sites={siteNames.length} hasCalibration={hasCalibration} latest={detection} />
        ) : (
          <p className="label">Analysts and owners save detections.</p>
        )}
      </aside>
    </div>
  );
}

function Swatch({ colour }: { colour: string }) {
  return <span aria-hidden="true" className="ml-2 inline-block size-2.5 align-baseline opacity-60" style={{ background: colour }} />;
}

function nameOf(detection: DetectionAnswer): string {
  return [`detection ${detection.number}`, detection.method, detection.label, detection.createdBy].filter(Boolean).join(" · ");
}

function siteHistograms(answer: HistogramsAnswer | undefined, siteNames: string[], detection: DetectionAnswer | null): SiteHistogram[] {
  return siteNames.map((name, site) => {
    const found = answer?.sites.find((candidate) => candidate.site === site);
    return {
      site,
      name: siteText(name),
      firstBin: found?.firstBin ?? 0,
      frequencies: found?.counts ?? [],
      threshold: detection?.thresholds[site] ?? null,
      mixture: detection?.mixture[site] ?? null,
    };
  });
}

/** One horizontal scale for all sites; the last half per mille of the brightest site is left outside. */
function lastDrawnCount(histograms: SiteHistogram[]): number {
  return Math.max(1, ...histograms.map(({ firstBin, frequencies }) => firstBin + quantileBin(frequencies)));
}

function quantileBin(frequencies: number[]): number {
  const shots = frequencies.reduce((sum, frequency) => sum + frequency, 0);
  let seen = 0;
  for (let bin = 0; bin < frequencies.length; bin++) {
    seen += frequencies[bin];
    if (seen >= MOST_FREQUENT_SHARE * shots) return bin;
  }
  return 0;
}
