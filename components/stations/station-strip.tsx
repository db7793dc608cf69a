"use client";

import Link from "next/link";
import { usePathname, useSearchParams } from "next/navigation";

export interface Station {
  segment: "shots" | "detection" | "correlations" | "front";
  name: string;
  /** The key figure, such as "36 000 kept". */
  figure: string;
  /** One line under it: what it is from, or what to do next. */
  note: string;
  state: "current" | "outdated" | "missing";
}

const STATE_WORDS: Record<Station["state"], string> = { current: "up to date", outdated: "out of date", missing: "not made yet" };

/** The four stations of a run on one strip, each with its key figure and whether it is up to date. */
export function StationStrip({ runId, stations }: { runId: string; stations: Station[] }) {
  const pathname = usePathname();
  const analysis = useSearchParams().get("analysis");
  return (
    <nav aria-label="Stations of the run" className="mt-4 mb-6 border-y border-rule">
      <ol className="grid grid-cols-2 sm:grid-cols-4">
        {stations.map((station, index) => {
          const path = `/runs/${runId}/${station.segment}`;
          const href = analysis ? `${path}?analysis=${encodeURIComponent(analysis)}` : path;
          const here = pathname === path;
          return (
            <li key={station.segment} className={`border-hairline ${index % 2 === 1 ? "border-l" : ""} ${index >= 2 ? "border-t sm:border-t-0" : ""} ${index === 2 ? "sm:border-l" : ""}`}>
              <Link
                href={href}
                aria-current={here ? "page" : undefined}
                className={`relative block h-full px-3 py-2 no-underline hover:bg-well sm:px-4 ${here ? "bg-well" : ""}`}
              >
                {here && <span aria-hidden="true" className="absolute inset-x-0 -top-px h-[3px] bg-ink" />}
                <span className="label flex items-baseline justify-between gap-2">
                  <span>
                    <span className="figures">{index + 1}</span> {station.name}
                  </span>
                  <span title={STATE_WORDS[station.state]} className={station.state === "outdated" ? "text-warning" : ""}>
                    <StateMark state={station.state} />
                    <span className="sr-only">{STATE_WORDS[station.state]}</span>
                  </span>
                </span>
                <span className="figures block truncate text-[1.1rem] leading-tight font-[620]">{station.figure}</span>
                <span className="label block truncate">{station.state === "outdated" ? `out of date: ${station.note}` : station.note}</span>
              </Link>
            </li>
          );
        })}
      </ol>
    </nav>
  );
}

function StateMark({ state }: { state: Station["state"] }) {
  return (
    <svg viewBox="0 0 10 10" width="9" height="9" aria-hidden="true" className="inline-block">
      <circle cx="5" cy="5" r="4" fill={state === "current" ? "currentColor" : "none"} stroke="currentColor" strokeWidth="1.4" strokeDasharray={state === "missing" ? "2 2" : undefined} />
    </svg>
  );
}
