import { ENDPOINTS } from "../endpoints";
import { json } from "@/lib/http/answers";
import { openapiDocument } from "@/lib/http/openapi";
import { openapiEndpoint } from "@/lib/http/openapi-endpoint";
import { serve } from "@/lib/http/serve";

export const GET = serve(openapiEndpoint, async () => json(openapiDocument(ENDPOINTS)));
