import type { ReactNode } from "react";
import { RunHead } from "@/components/stations/run-head";
import { StationStrip } from "@/components/stations/station-strip";
import { may } from "@/lib/accounts/policy";
import { runPageData } from "./run-page-data";
import { stationsOf } from "./stations";

export default async function RunLayout({ children, params }: { children: ReactNode; params: Promise<{ runId: string }> }) {
  const data = await runPageData((await params).runId);
  return (
    <>
      <RunHead
        run={data.run}
        jobs={data.active.filter(({ kind }) => kind !== "study").map(({ id, kind }) => ({ id, kind }))}
        mayCancel={may(data.actor, "job.cancel")}
        mayDelete={may(data.actor, "run.delete")}
        dependents={{ archives: data.run.archives.length, detections: data.detections.length, analyses: data.analyses.length }}
      />
      <StationStrip runId={data.run.id} stations={stationsOf(data)} />
      {children}
    </>
  );
}
