import * as accounts from "@/lib/accounts/account-endpoints";
import { healthEndpoint } from "@/lib/health/health-endpoint";
import type { Endpoint } from "@/lib/http/endpoint";
import { openapiEndpoint } from "@/lib/http/openapi-endpoint";

/** Every call of the HTTP API. A route that is missing here, or the other way round, fails the suite. */
export const ENDPOINTS: Endpoint[] = [...Object.values(accounts), healthEndpoint, openapiEndpoint];
