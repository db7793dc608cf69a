import type { Metadata } from "next";
import { NewRunForm } from "@/components/upload/new-run-form";
import { requireActor } from "@/lib/accounts/current-actor";
import { refusal } from "@/lib/accounts/policy";

export const metadata: Metadata = { title: "New run" };

export default async function NewRunPage() {
  const refused = refusal(await requireActor(), "run.create");
  return (
    <>
      <h1 className="mb-5">New run</h1>
      {refused ? <p className="notice">{refused.detail}</p> : <NewRunForm />}
    </>
  );
}
