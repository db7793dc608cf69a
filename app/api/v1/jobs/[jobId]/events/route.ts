import { serve } from "@/lib/http/serve";
import { jobEventsEndpoint } from "@/lib/jobs/job-endpoints";
import { jobEvents } from "@/lib/jobs/job-events";

export const GET = serve(jobEventsEndpoint, ({ actor, params, request }) => jobEvents(actor, params.jobId, request.signal));
