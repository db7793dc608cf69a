import { createTokenEndpoint, listTokensEndpoint } from "@/lib/accounts/account-endpoints";
import { createToken } from "@/lib/accounts/create-token";
import { listTokens } from "@/lib/accounts/list-tokens";
import { created, json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";

export const POST = serve(createTokenEndpoint, async ({ actor, body }) => {
  const token = await createToken(actor, body);
  return isProblem(token) ? token : created(token);
});

export const GET = serve(listTokensEndpoint, async ({ actor, query }) => {
  const page = await listTokens(actor, query);
  return isProblem(page) ? page : json(page);
});
