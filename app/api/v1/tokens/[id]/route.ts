import { revokeTokenEndpoint } from "@/lib/accounts/account-endpoints";
import { revokeToken } from "@/lib/accounts/revoke-token";
import { noContent } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";

export const DELETE = serve(revokeTokenEndpoint, async ({ actor, params }) => (await revokeToken(actor, params.id)) ?? noContent());
