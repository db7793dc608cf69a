import type { Metadata } from "next";
import Link from "next/link";
import { Suspense } from "react";
import { RunsTable } from "@/components/runs/runs-table";
import { DropToBegin } from "@/components/upload/drop-to-begin";
import { requireActor } from "@/lib/accounts/current-actor";
import { may } from "@/lib/accounts/policy";
import { listRunRows } from "@/lib/analyses/list-run-rows";
import { isProblem } from "@/lib/problem";

export const metadata: Metadata = { title: "Runs" };

export default async function RunsPage() {
  const actor = await requireActor();
  const listed = await listRunRows(actor);
  if (isProblem(listed)) return <p className="notice notice-error">{listed.detail}</p>;
  const mayCreate = may(actor, "run.create");
  const content = (
    <>
      <div className="mb-4 flex flex-wrap items-baseline justify-between gap-3">
        <h1>Runs</h1>
        {mayCreate && (
          <span className="flex items-baseline gap-3">
            <span className="label hidden md:inline">or drop a file anywhere on this page</span>
            <Link href="/runs/new" className="button button-primary">
              New run
            </Link>
          </span>
        )}
      </div>
      {listed.rows.length === 0 ? (
        <p className="notice max-w-[60ch]">
          No runs yet. {mayCreate ? "Drop the archive of a night on this page, or press “New run”: shots, detection, correlations and front follow from there." : "A contributor of your group begins the first one."}
        </p>
      ) : (
        <Suspense>
          <RunsTable rows={listed.rows} />
        </Suspense>
      )}
      {listed.more && <p className="label mt-3">The newest {listed.rows.length} runs are shown; older ones are listed by the API.</p>}
    </>
  );
  return mayCreate ? <DropToBegin>{content}</DropToBegin> : content;
}
