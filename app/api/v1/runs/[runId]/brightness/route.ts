import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";
import { getBrightness } from "@/lib/runs/get-brightness";
import { brightnessEndpoint } from "@/lib/runs/run-endpoints";

export const GET = serve(brightnessEndpoint, async ({ actor, params }) => {
  const brightness = await getBrightness(actor, params.runId);
  return isProblem(brightness) ? brightness : json(brightness);
});
