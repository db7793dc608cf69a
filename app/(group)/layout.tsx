import type { ReactNode } from "react";
import { GroupHeader } from "@/components/shell/group-header";
import { requireActor } from "@/lib/accounts/current-actor";
import { signOutAction } from "./actions";

export default async function GroupLayout({ children }: { children: ReactNode }) {
  const actor = await requireActor();
  return (
    <>
      <a href="#main" className="button sr-only focus:not-sr-only focus:absolute focus:z-10 focus:bg-paper">
        Skip to the content
      </a>
      <GroupHeader groupName={actor.groupName} userName={actor.userName} role={actor.role} signOut={signOutAction} />
      <main id="main" className="mx-auto w-full max-w-[1680px] px-4 pt-5 pb-16 sm:px-7">
        {children}
      </main>
    </>
  );
}
