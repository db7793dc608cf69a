import "server-only";
import { readFile } from "node:fs/promises";
import path from "node:path";
import type { Tinypool } from "tinypool";
import { z } from "zod";
import type { Database } from "@/db/connection";
import type { Actor } from "@/lib/accounts/policy";
import { addArchives } from "@/lib/archives/add-archives";
import { RoleField } from "@/lib/archives/archive-schemas";
import { storeBytes } from "@/lib/archives/store-bytes";
import { createDetection } from "@/lib/detections/create-detection";
import { CreateDetectionInput } from "@/lib/detections/detection-schemas";
import { isProblem, type Problem } from "@/lib/problem";
import { createRun } from "@/lib/runs/create-run";
import { CreateRunInput } from "@/lib/runs/run-schemas";
import { CreateAnalysisInput } from "./analysis-schemas";
import { createAnalysis } from "./create-analysis";

const DemoRun = z.object({
  run: CreateRunInput,
  archives: z.array(z.object({ file: z.string().regex(/^[\w.-]+$/), role: RoleField })).min(1),
  detection: CreateDetectionInput,
  analysis: z.record(z.string(), z.unknown()),
});

export interface DemoWork {
  database: Database;
  contributor: Actor;
  analyst: Actor;
  /** Where `runs.json` and the archives lie. */
  directory: string;
  drain: (database: Database, pool: Tinypool) => Promise<void>;
  pool: Tinypool;
}

/**
 * Makes the demo runs the way members would: a contributor's runs and archives, an analyst's detections and analyses, read
 * and computed by the same code as any other job.
 */
export async function seedDemoRuns({ database, contributor, analyst, directory, drain, pool }: DemoWork): Promise<void> {
  const demoRuns = z.array(DemoRun).parse(JSON.parse(await readFile(path.join(directory, "runs.json"), "utf8")));
  const made: { runId: string; demo: z.output<typeof DemoRun> }[] = [];
  for (const demo of demoRuns.reverse()) {
    const run = mustWork(await createRun(contributor, demo.run));
    for (const { file, role } of demo.archives) {
      const bytes = await readFile(path.join(directory, file));
      const stored = await storeBytes(database, contributor.groupId, inOnePart(bytes));
      mustWork(await addArchives(contributor, run.id, [{ ...stored, filename: file }], { role, times_us: undefined }));
    }
    made.push({ runId: run.id, demo });
  }
  await drain(database, pool);
  for (const { runId, demo } of made) {
    const detection = mustWork(await createDetection(analyst, runId, demo.detection));
    mustWork(await createAnalysis(analyst, runId, CreateAnalysisInput.parse({ ...demo.analysis, detectionId: detection.id })));
  }
  await drain(database, pool);
}

async function* inOnePart(bytes: Uint8Array): AsyncGenerator<Uint8Array> {
  yield bytes;
}

function mustWork<T>(answer: T | Problem): T {
  if (isProblem(answer)) throw new Error(`the demo cannot be made: ${answer.detail}`);
  return answer;
}
