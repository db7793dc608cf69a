import type { Metadata } from "next";
import { ShotsStation } from "@/components/stations/shots-station";
import { may } from "@/lib/accounts/policy";
import { runPageData } from "../run-page-data";

export const metadata: Metadata = { title: "Shots" };

export default async function ShotsPage({ params }: PageProps<"/runs/[runId]/shots">) {
  const { actor, run, active } = await runPageData((await params).runId);
  const view = run.version > 0 && run.countType ? { ...run, runId: run.id, countType: run.countType } : null;
  return <ShotsStation runId={run.id} notes={run.notes} view={view} archives={run.archives} mayUpload={may(actor, "archive.upload")} reading={active.some(({ kind }) => kind === "ingest")} />;
}
