import { createDetection } from "@/lib/detections/create-detection";
import { createDetectionEndpoint, listDetectionsEndpoint } from "@/lib/detections/detection-endpoints";
import { listDetections } from "@/lib/detections/list-detections";
import { created, json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";
import { absentRun } from "@/lib/runs/find-run";

export const POST = serve(
  createDetectionEndpoint,
  async ({ actor, params, body }) => {
    const detection = await createDetection(actor, params.runId, body);
    return isProblem(detection) ? detection : created(detection);
  },
  absentRun,
);

export const GET = serve(listDetectionsEndpoint, async ({ actor, params, query }) => {
  const page = await listDetections(actor, params.runId, query);
  return isProblem(page) ? page : json(page);
});
