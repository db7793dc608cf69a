import { z } from "zod";
import { endpoint } from "@/lib/http/endpoint";
import { Id } from "@/lib/http/id-params";
import { UploadQuery } from "./archive-schemas";

const Uploaded = z.object({
  archives: z.array(z.object({ id: z.string(), filename: z.string(), bytes: z.number(), sha256: z.string(), duplicate: z.boolean() })),
  job: z.object({ id: z.string() }).nullable(),
  duplicate: z.boolean(),
});

export const uploadArchivesEndpoint = endpoint({
  method: "POST",
  path: "/api/v1/runs/{runId}/archives",
  action: "archive.upload",
  summary: "Send archives: multipart field `file` (one or more), or a raw body with `?filename=`",
  params: z.object({ runId: Id }),
  query: UploadQuery,
  streamedBody: true,
  idempotent: true,
  answers: {
    200: { description: "These bytes are part of the run already", schema: Uploaded },
    202: { description: "Kept, and being read by the job", schema: Uploaded },
  },
  example: "time_us,shot,a,b\n5,0,1,9\n5,1,0,8\n",
  exampleQuery: { filename: "shots.csv" },
});

export const downloadArchiveEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/archives/{archiveId}/raw",
  action: "archive.read",
  summary: "The original bytes of an archive",
  params: z.object({ archiveId: Id }),
  answers: { 200: { description: "The bytes as they were sent", contentType: "application/octet-stream" } },
});
