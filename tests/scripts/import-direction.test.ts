import { Linter } from "eslint";
import { describe, expect, it } from "vitest";
import { directionFault, importDirection } from "../../scripts/eslint/import-direction.mjs";

function lint(filename: string, code: string): string[] {
  const linter = new Linter({ cwd: "/house" });
  const messages = linter.verify(
    code,
    [{ files: ["**/*.ts"], plugins: { house: { rules: { "import-direction": importDirection } } }, rules: { "house/import-direction": "error" } }],
    { filename: `/house/${filename}` },
  );
  return messages.map((message) => message.message);
}

describe("imports go down only", () => {
  it.each([
    ["lib/science/front/crossing.ts", "db/connection"],
    ["lib/science/front/crossing.ts", "lib/problem"],
    ["lib/formats/csv-shots.ts", "lib/runs/create-run"],
    ["lib/runs/create-run.ts", "lib/analyses/run-analysis"],
    ["components/charts/axis.tsx", "db/schema/runs"],
    ["components/charts/axis.tsx", "lib/runs/create-run"],
    ["db/connection.ts", "lib/accounts/policy"],
    ["lib/accounts/sign-in.ts", "components/shell/wordmark"],
    ["app/page.tsx", "db/connection"],
    ["lib/jobs/claim-job.ts", "lib/runs/find-run"],
    ["lib/jobs/claim-job.ts", "lib/jobs/job-handlers"],
    ["lib/runs/ingest-run.ts", "lib/detections/create-detection"],
    ["lib/accounts/sign-in.ts", "lib/jobs/enqueue-job"],
    ["lib/unknown/new-room.ts", "lib/runs/find-run"],
  ])("%s may not import %s", (importer, imported) => {
    expect(directionFault(importer, imported)).toContain("imports go down only");
  });

  it.each([
    ["app/(group)/runs/page.tsx", "lib/runs/list-runs"],
    ["app/(group)/runs/page.tsx", "components/runs/runs-table"],
    ["components/charts/axis.tsx", "lib/number-text"],
    ["lib/analyses/run-analysis.ts", "lib/science/front/analyse-front"],
    ["lib/runs/create-run.ts", "db/schema/runs"],
    ["lib/runs/read-archives.ts", "lib/archives/archive-source"],
    ["lib/analyses/plan-analysis.ts", "lib/detections/list-detections"],
    ["lib/jobs/job-handlers.ts", "lib/analyses/run-analysis"],
    ["db/seed.ts", "lib/accounts/create-group"],
    ["tests/science/front/crossing.test.ts", "db/connection"],
  ])("%s may import %s", (importer, imported) => {
    expect(directionFault(importer, imported)).toBeNull();
  });

  it("sees aliases, relative paths, re-exports and dynamic imports", () => {
    expect(lint("lib/science/a.ts", 'import { x } from "@/db/connection"; x();')).toHaveLength(1);
    expect(lint("lib/science/stats/a.ts", 'import { x } from "../../runs/b"; x();')).toHaveLength(1);
    expect(lint("lib/science/a.ts", 'export { x } from "@/lib/runs/b";')).toHaveLength(1);
    expect(lint("lib/science/a.ts", 'void import("@/lib/runs/b");')).toHaveLength(1);
    expect(lint("lib/science/stats/a.ts", 'import { x } from "../front/b"; x();')).toHaveLength(0);
  });
});
