import type { Metadata } from "next";
import { Suspense } from "react";
import { CorrelationsStation } from "@/components/stations/correlations-station";
import { readTraces } from "@/lib/analyses/read-results";
import { AnalysisView } from "../analysis-view";
import { runPageData } from "../run-page-data";

export const metadata: Metadata = { title: "Correlations" };

export default async function CorrelationsPage({ params, searchParams }: PageProps<"/runs/[runId]/correlations">) {
  const data = await runPageData((await params).runId);
  return (
    <AnalysisView data={data} wish={(await searchParams).analysis}>
      {async (row) => (
        <Suspense>
          <CorrelationsStation analysisId={row.analysis.id} siteNames={row.siteNames} traces={await readTraces(row)} />
        </Suspense>
      )}
    </AnalysisView>
  );
}
