import { signInEndpoint, signOutEndpoint } from "@/lib/accounts/account-endpoints";
import { closeSession } from "@/lib/accounts/open-session";
import { forgottenCookie, setCookieHeader } from "@/lib/accounts/session-cookie";
import { showIdentity } from "@/lib/accounts/show-identity";
import { signIn } from "@/lib/accounts/sign-in";
import { json, noContent } from "@/lib/http/answers";
import { clientAddress } from "@/lib/http/client-address";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";

export const POST = serve(signInEndpoint, async ({ body, request }) => {
  const opened = await signIn({ ...body, clientAddress: clientAddress(request.headers) });
  if (isProblem(opened)) return opened;
  return json(showIdentity(opened.actor), 200, { "set-cookie": setCookieHeader(opened.cookie) });
});

export const DELETE = serve(signOutEndpoint, async ({ actor }) => {
  await closeSession(actor.credentialId);
  return noContent({ "set-cookie": setCookieHeader(forgottenCookie()) });
});
