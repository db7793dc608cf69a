import { z } from "zod";
import { endpoint } from "@/lib/http/endpoint";

const HealthAnswer = z.object({
  status: z.enum(["ok", "starting", "unavailable"]),
  database: z.enum(["ok", "unreachable"]),
  worker: z.enum(["ok", "missing", "unknown"]),
});

export const healthEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/health",
  action: "public",
  summary: "Whether everything is up: the database, and a worker heard of within 30 s",
  answers: {
    200: { description: "Everything is up", schema: HealthAnswer },
    503: { description: "Something is missing; the fields name it", schema: HealthAnswer },
  },
});
