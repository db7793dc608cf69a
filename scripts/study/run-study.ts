/** The studies of the statistics: simulated repeats on two threads, tables to stdout and into docs/validation.md. */
import { readFileSync, writeFileSync } from "node:fs";
import { parseArgs } from "node:util";
import { CORRELATOR_CELLS, correlatorTable, mergeCorrelatorTallies, type CorrelatorTally } from "@/scripts/study/correlator-coverage";
import { FRONT_CELLS } from "@/scripts/study/front-cells";
import { mergeFrontTallies, type FrontTally } from "@/scripts/study/front-coverage";
import { frontTable } from "@/scripts/study/front-table";
import { replaceMarked } from "@/scripts/study/marked-section";
import type { StudyTask } from "@/scripts/study/study-task";
import { runOnThreads } from "@/scripts/study/thread-pool";

type StudyName = StudyTask["study"];

const STUDIES: readonly StudyName[] = ["correlators", "fronts", "threshold-free", "fitted-laws"];
const DEFAULT_REPEATS: Readonly<Record<StudyName, number>> = { correlators: 250, fronts: 300, "threshold-free": 200, "fitted-laws": 30 };
/** Repeats of one task: small enough that both threads end together. */
const REPEATS_A_TASK: Readonly<Record<"correlators" | "fronts", number>> = { correlators: 125, fronts: 50 };
const DOCUMENT = "docs/validation.md";

const { values: options } = parseArgs({
  options: { only: { type: "string" }, repeats: { type: "string" }, seed: { type: "string", default: "1" }, threads: { type: "string", default: "2" }, "no-write": { type: "boolean", default: false } },
});

const chosen = options.only === undefined ? STUDIES : STUDIES.filter((name) => options.only?.split(",").includes(name));
if (chosen.length === 0) throw new Error(`--only takes one or more of ${STUDIES.join(", ")}`);
const seed = wholeNumber("seed", options.seed);
const threads = wholeNumber("threads", options.threads);
for (const name of chosen) await runStudy(name);

function wholeNumber(name: string, text: string): number {
  const value = Number(text);
  if (!Number.isInteger(value) || value < 1) throw new Error(`--${name} takes a whole number from 1, not ${text}`);
  return value;
}

async function runStudy(name: StudyName): Promise<void> {
  const repeats = options.repeats === undefined ? DEFAULT_REPEATS[name] : wholeNumber("repeats", options.repeats);
  const started = performance.now();
  const table = await tableOf(name, repeats);
  const seconds = (performance.now() - started) / 1000;
  console.log(`\n## ${name}: ${repeats} repeats, seed ${seed}, ${seconds.toFixed(0)} s on ${threads} threads\n\n${table}`);
  if (options["no-write"]) return;
  const text = replaceMarked(readFileSync(DOCUMENT, "utf8"), name, `${repeats} repeats, seed ${seed}.\n\n${table}`);
  if (text !== null) writeFileSync(DOCUMENT, text);
}

async function tableOf(name: StudyName, repeats: number): Promise<string> {
  const script = new URL("study-thread.mjs", import.meta.url);
  if (name === "threshold-free" || name === "fitted-laws") {
    const [table] = await runOnThreads(script, threads, [{ study: name, repeats, seed }]);
    return table as string;
  }
  const rows = name === "correlators" ? CORRELATOR_CELLS.length : FRONT_CELLS.length;
  const tasks: StudyTask[] = Array.from({ length: rows }, (_, row) => row).flatMap((row) => tasksOfRow(name, row, repeats));
  const results = await runOnThreads(script, threads, tasks);
  const ofRow = <Tally>(row: number, merge: (first: Tally, second: Tally) => Tally) =>
    (results as Tally[]).filter((_, at) => "row" in tasks[at] && tasks[at].row === row).reduce(merge);
  return name === "correlators"
    ? correlatorTable(CORRELATOR_CELLS.map((_, row) => ofRow<CorrelatorTally>(row, mergeCorrelatorTallies)))
    : frontTable(FRONT_CELLS.map((_, row) => ofRow<FrontTally>(row, mergeFrontTallies)));
}

function tasksOfRow(study: "correlators" | "fronts", row: number, repeats: number): StudyTask[] {
  const size = REPEATS_A_TASK[study];
  return Array.from({ length: Math.ceil(repeats / size) }, (_, n) => ({ study, row, first: n * size, count: Math.min(size, repeats - n * size), seed }));
}
