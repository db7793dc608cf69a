import "server-only";
import { drizzle, type MySql2Database } from "drizzle-orm/mysql2";
import { createPool, type Pool } from "mysql2/promise";

export type Database = MySql2Database & { $client: Pool };

/** Returns Drizzle over a pool of prepared-statement-capable connections; times are UTC, ids compare byte by byte. */
export function connect(databaseUrl: string, connectionLimit = 10): Database {
  const pool = createPool({
    uri: databaseUrl,
    timezone: "Z",
    connectionLimit,
    charset: "utf8mb4",
    maxPreparedStatements: 200,
  });
  return drizzle({ client: pool, casing: "snake_case" });
}

const shared = globalThis as typeof globalThis & { strandlineDatabase?: Database };

/** Returns this process's database, opened at first use from `DATABASE_URL`. */
export function database(): Database {
  if (shared.strandlineDatabase) return shared.strandlineDatabase;
  const url = process.env.DATABASE_URL;
  if (!url) throw new Error("DATABASE_URL is not set; `npm start` sets it");
  shared.strandlineDatabase = connect(url);
  return shared.strandlineDatabase;
}

/** Closes the pool, so that a process can end. */
export async function closeDatabase(): Promise<void> {
  await shared.strandlineDatabase?.$client.end();
  delete shared.strandlineDatabase;
}
