import { getDetectionEndpoint } from "@/lib/detections/detection-endpoints";
import { getDetection } from "@/lib/detections/list-detections";
import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";

export const GET = serve(getDetectionEndpoint, async ({ actor, params }) => {
  const detection = await getDetection(actor, params.detectionId);
  return isProblem(detection) ? detection : json(detection);
});
