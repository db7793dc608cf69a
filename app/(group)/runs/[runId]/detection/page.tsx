import type { Metadata } from "next";
import { DetectionStation } from "@/components/stations/detection-station";
import { NotYet } from "@/components/stations/not-yet";
import { may } from "@/lib/accounts/policy";
import { runPageData } from "../run-page-data";

export const metadata: Metadata = { title: "Detection" };

export default async function DetectionPage({ params }: PageProps<"/runs/[runId]/detection">) {
  const { actor, run, detections } = await runPageData((await params).runId);
  if (run.version === 0) return <NotYet runId={run.id} missing="shots" />;
  return (
    <DetectionStation
      runId={run.id}
      siteNames={run.siteNames}
      detections={detections}
      mayCreate={may(actor, "detection.create")}
      hasCalibration={run.calibrationDarkShots > 0 && run.calibrationBrightShots > 0}
    />
  );
}
