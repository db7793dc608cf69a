import "server-only";
import { and, eq, gt, gte, sql } from "drizzle-orm";
import { readBytes, writeBytes } from "@/db/blobs";
import type { Database } from "@/db/connection";
import { runs } from "@/db/schema/runs";
import { shotBlocks } from "@/db/schema/shot-blocks";
import { countTypeOf, packBlock, unpackBlock, type CountType, type ShotBlock } from "./shot-block";

/** Which blocks: of one version of one run. */
export interface VersionKey {
  runId: string;
  version: number;
}

interface BlockRow {
  shots: number;
  count_type: CountType;
  data: Buffer;
}

/** Writes one block of a version that is not visible yet. */
export async function writeBlock(database: Database, { runId, version }: VersionKey, slot: number, seq: number, block: ShotBlock): Promise<void> {
  await writeBytes(
    database,
    "INSERT INTO shot_blocks (run_id, version, time_slot, seq, shots, count_type, data) VALUES (?, ?, ?, ?, ?, ?, ?)",
    [runId, version, slot, seq, block.shots, countTypeOf(block.counts), await packBlock(block)],
  );
}

/** Returns the blocks of a slot from `fromSeq` on, in order. */
export async function readBlocks(database: Database, { runId, version }: VersionKey, slot: number, fromSeq = 0): Promise<ShotBlock[]> {
  const rows = await readBytes<BlockRow>(
    database,
    "SELECT shots, count_type, data FROM shot_blocks WHERE run_id = ? AND version = ? AND time_slot = ? AND seq >= ? ORDER BY seq",
    [runId, version, slot, fromSeq],
  );
  return Promise.all(rows.map(({ shots, count_type, data }) => unpackBlock(data, shots, count_type)));
}

/** Removes the blocks of a slot from `fromSeq` on. */
export async function removeBlocks(database: Database, { runId, version }: VersionKey, slot: number, fromSeq: number): Promise<void> {
  await database
    .delete(shotBlocks)
    .where(and(eq(shotBlocks.runId, runId), eq(shotBlocks.version, version), eq(shotBlocks.timeSlot, slot), gte(shotBlocks.seq, fromSeq)));
}

/** Removes what a reading left behind that did not come to its end: blocks of versions that never became visible. */
export async function removeLeftovers(database: Database, runId: string): Promise<void> {
  // Asked in the same statement: a version that has become visible meanwhile is never touched; without the run, nothing stays.
  const visible = sql`coalesce((select ${runs.currentVersion} from ${runs} where ${runs.id} = ${runId}), 0)`;
  await database.delete(shotBlocks).where(and(eq(shotBlocks.runId, runId), gt(shotBlocks.version, visible)));
}
