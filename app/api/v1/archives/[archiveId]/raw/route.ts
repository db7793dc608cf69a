import { downloadArchiveEndpoint } from "@/lib/archives/archive-endpoints";
import { downloadArchive } from "@/lib/archives/download-archive";
import { serve } from "@/lib/http/serve";

export const GET = serve(downloadArchiveEndpoint, ({ actor, params, request }) => downloadArchive(actor, params.archiveId, request));
