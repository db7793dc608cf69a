import { healthEndpoint } from "@/lib/health/health-endpoint";
import { readHealth } from "@/lib/health/read-health";
import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";

export const GET = serve(healthEndpoint, async () => {
  const health = await readHealth();
  return json(health, health.status === "ok" ? 200 : 503);
});
