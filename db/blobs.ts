import "server-only";
import type { RowDataPacket } from "mysql2";
import type { Database } from "./connection";

/**
 * Runs a statement with bytes among its values as a prepared one: raw bytes instead of hexadecimal text, six times as
 * fast and half as large on the wire.
 */
export async function writeBytes(database: Pick<Database, "$client">, statement: string, values: (string | number | Buffer | null)[]): Promise<void> {
  await database.$client.execute(statement, values);
}

/** Returns rows with bytes among their columns, read by a prepared statement. */
export async function readBytes<Row>(database: Pick<Database, "$client">, statement: string, values: (string | number)[]): Promise<Row[]> {
  const [rows] = await database.$client.execute<(Row & RowDataPacket)[]>(statement, values);
  return rows;
}
