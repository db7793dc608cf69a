import type { Metadata } from "next";
import { Suspense } from "react";
import { FrontStation } from "@/components/stations/front-station";
import { StudiesSection } from "@/components/studies/studies-section";
import { may } from "@/lib/accounts/policy";
import { readFront, readTraces } from "@/lib/analyses/read-results";
import { isProblem } from "@/lib/problem";
import { latestStudies } from "@/lib/studies/latest-studies";
import { AnalysisView } from "../analysis-view";
import { runPageData } from "../run-page-data";

export const metadata: Metadata = { title: "Front" };

export default async function FrontPage({ params, searchParams }: PageProps<"/runs/[runId]/front">) {
  const data = await runPageData((await params).runId);
  const { actor, run } = data;
  return (
    <AnalysisView data={data} wish={(await searchParams).analysis}>
      {async (row) => {
        const studies = await latestStudies(actor, row.analysis.id);
        return (
          // One boundary for both: the studies must not stand where the front will be.
          <Suspense>
            <FrontStation
              analysisId={row.analysis.id}
              siteNames={row.siteNames}
              traces={await readTraces(row)}
              front={await readFront(row)}
              comparison={isProblem(studies) ? null : (studies.nullFront.done?.result.sentence ?? null)}
            />
            {!isProblem(studies) && (
              <StudiesSection
                key={row.analysis.id}
                analysisId={row.analysis.id}
                views={studies}
                model={run.model === "ising" ? "ising" : "xy"}
                jMaxHz={run.jMaxHz}
                mayStart={may(actor, "study.create")}
                mayCancel={may(actor, "job.cancel")}
              />
            )}
          </Suspense>
        );
      }}
    </AnalysisView>
  );
}
