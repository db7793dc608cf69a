import { meEndpoint } from "@/lib/accounts/account-endpoints";
import { showIdentity } from "@/lib/accounts/show-identity";
import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";

export const GET = serve(meEndpoint, async ({ actor }) => json({ ...showIdentity(actor), scopes: actor.scopes }));
