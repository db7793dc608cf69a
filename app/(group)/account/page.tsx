import type { Metadata } from "next";
import { TokenPanel } from "@/components/account/token-panel";
import { requireActor } from "@/lib/accounts/current-actor";
import { listTokens } from "@/lib/accounts/list-tokens";
import { isProblem } from "@/lib/problem";

export const metadata: Metadata = { title: "Account" };

export default async function AccountPage() {
  const actor = await requireActor();
  const tokens = await listTokens(actor, { limit: 100 });
  return (
    <>
      <h1>Account</h1>
      <dl className="mt-3 mb-9 grid grid-cols-[auto_1fr] gap-x-5 gap-y-1 [&>dt]:text-muted">
        <dt>Name</dt>
        <dd>{actor.userName}</dd>
        <dt>Mail</dt>
        <dd>{actor.email}</dd>
        <dt>Group</dt>
        <dd>{actor.groupName}</dd>
        <dt>Role</dt>
        <dd>{actor.role}</dd>
      </dl>
      <TokenPanel initial={isProblem(tokens) ? [] : tokens.items} />
    </>
  );
}
