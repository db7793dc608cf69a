import type { Metadata } from "next";
import { Suspense } from "react";
import { FrontStation } from "@/components/stations/front-station";
import { readFront, readTraces } from "@/lib/analyses/read-results";
import { AnalysisView } from "../analysis-view";
import { runPageData } from "../run-page-data";

export const metadata: Metadata = { title: "Front" };

export default async function FrontPage({ params, searchParams }: PageProps<"/runs/[runId]/front">) {
  const data = await runPageData((await params).runId);
  return (
    <AnalysisView data={data} wish={(await searchParams).analysis}>
      {async (row) => (
        <Suspense>
          <FrontStation analysisId={row.analysis.id} siteNames={row.siteNames} traces={await readTraces(row)} front={await readFront(row)} />
        </Suspense>
      )}
    </AnalysisView>
  );
}
