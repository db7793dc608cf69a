import type { RunRow } from "./run-row";

const WORDS: Record<RunRow["status"], { text: string; colour: string }> = {
  empty: { text: "no shots yet", colour: "text-muted" },
  ingesting: { text: "reading", colour: "text-accent" },
  ready: { text: "ready", colour: "text-good" },
  failed: { text: "refused", colour: "text-error" },
};

/** Where a run stands, in a word. */
export function RunState({ row }: { row: Pick<RunRow, "status" | "analysis"> }) {
  const analysed = row.status === "ready" && row.analysis;
  const { text, colour } = WORDS[row.status];
  return <span className={`whitespace-nowrap ${colour}`}>{analysed ? "analysed" : text}</span>;
}
