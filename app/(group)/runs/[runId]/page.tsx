import { redirect } from "next/navigation";
import { runPageData } from "./run-page-data";

/** The station that is furthest along: the front when there is one. */
export default async function RunPage({ params }: PageProps<"/runs/[runId]">) {
  const { run, detections, analyses } = await runPageData((await params).runId);
  if (analyses.some(({ state }) => state === "done")) redirect(`/runs/${run.id}/front`);
  redirect(`/runs/${run.id}/${run.version > 0 && detections.length > 0 ? "front" : run.version > 0 ? "detection" : "shots"}`);
}
