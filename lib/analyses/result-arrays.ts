import "server-only";
import { and, eq } from "drizzle-orm";
import { readBytes, writeBytes } from "@/db/blobs";
import type { Database } from "@/db/connection";
import { analyses } from "@/db/schema/analyses";
import { resultArrays } from "@/db/schema/result-arrays";

const PART_BYTES = 8 * 1024 * 1024;

/** A result as it is kept: a typed array with its shape in C order. */
export interface ResultArray {
  shape: number[];
  values: Float64Array | Uint8Array;
}

/** Writes a result array; the same bytes again replace themselves, so a repeated attempt does no harm. */
export async function writeArray(database: Database, analysisId: string, name: string, { shape, values }: ResultArray): Promise<void> {
  const dtype = values instanceof Float64Array ? "float64" : "uint8";
  await writeParts(database, analysisId, name, dtype, shape, Buffer.from(values.buffer, values.byteOffset, values.byteLength));
}

/** Writes a result that is JSON. */
export async function writeJson(database: Database, analysisId: string, name: string, value: unknown): Promise<void> {
  const bytes = Buffer.from(JSON.stringify(value), "utf8");
  await writeParts(database, analysisId, name, "json", [bytes.length], bytes);
}

async function writeParts(database: Database, analysisId: string, name: string, dtype: string, shape: number[], bytes: Buffer): Promise<void> {
  for (let part = 0; part === 0 || part * PART_BYTES < bytes.length; part++) {
    await writeBytes(database, "REPLACE INTO result_arrays (analysis_id, name, part, dtype, shape, data) VALUES (?, ?, ?, ?, ?, ?)", [
      analysisId,
      name,
      part,
      dtype,
      JSON.stringify(shape),
      bytes.subarray(part * PART_BYTES, (part + 1) * PART_BYTES),
    ]);
  }
}

/** Returns a float64 result, or its values from index `from` on, `count` of them. Throws when it is not there. */
export async function readArray(database: Database, analysisId: string, name: string, from = 0, count = Infinity): Promise<Float64Array> {
  const bytes = await readRange(database, analysisId, name, 8 * from, 8 * count);
  return new Float64Array(Uint8Array.from(bytes).buffer);
}

/** Returns a uint8 result. Throws when it is not there. */
export async function readMarks(database: Database, analysisId: string, name: string): Promise<Uint8Array> {
  return Uint8Array.from(await readRange(database, analysisId, name, 0, Infinity));
}

/** Tells whether an analysis keeps a result of this name. */
export async function hasResult(database: Database, analysisId: string, name: string): Promise<boolean> {
  const rows = await database.select({ part: resultArrays.part }).from(resultArrays).where(and(eq(resultArrays.analysisId, analysisId), eq(resultArrays.name, name))).limit(1);
  return rows.length > 0;
}

/** Returns a result that is JSON. Throws when it is not there. */
export async function readJson<T>(database: Database, analysisId: string, name: string): Promise<T> {
  return JSON.parse((await readRange(database, analysisId, name, 0, Infinity)).toString("utf8")) as T;
}

async function readRange(database: Database, analysisId: string, name: string, offset: number, length: number): Promise<Buffer> {
  const firstPart = Math.floor(offset / PART_BYTES);
  const lastPart = length === Infinity ? 2 ** 31 - 1 : Math.floor(Math.max(offset, offset + length - 1) / PART_BYTES);
  const rows = await readBytes<{ data: Buffer }>(
    database,
    "SELECT data FROM result_arrays WHERE analysis_id = ? AND name = ? AND part BETWEEN ? AND ? ORDER BY part",
    [analysisId, name, firstPart, lastPart],
  );
  if (rows.length === 0) throw new Error(`result ${name} of analysis ${analysisId} is missing`);
  const joined = rows.length === 1 ? rows[0].data : Buffer.concat(rows.map(({ data }) => data));
  const start = offset - firstPart * PART_BYTES;
  return joined.subarray(start, length === Infinity ? undefined : start + length);
}

/**
 * Removes the results of an analysis that was removed while they were being written. Those of one that exists stay: another
 * worker may have finished it.
 */
export async function removeArraysOfNobody(database: Database, analysisId: string): Promise<void> {
  const owners = await database.select({ id: analyses.id }).from(analyses).where(eq(analyses.id, analysisId));
  if (owners.length === 0) await database.delete(resultArrays).where(eq(resultArrays.analysisId, analysisId));
}
