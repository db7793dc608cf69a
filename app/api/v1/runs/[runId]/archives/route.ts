import { addArchives, uploadRefusal } from "@/lib/archives/add-archives";
import { uploadArchivesEndpoint } from "@/lib/archives/archive-endpoints";
import { receiveFiles } from "@/lib/archives/receive-files";
import { accepted, json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";

export const POST = serve(uploadArchivesEndpoint, async ({ actor, params, query, request }) => {
  const refused = await uploadRefusal(actor, params.runId);
  if (refused) return refused;
  const files = await receiveFiles(actor, request, query.filename);
  if (isProblem(files)) return files;
  const added = await addArchives(actor, params.runId, files, query);
  if (isProblem(added)) return added;
  return added.duplicate ? json(added) : accepted(added);
});
