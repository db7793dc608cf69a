import "server-only";
import { migrate } from "drizzle-orm/mysql2/migrator";
import { drizzle } from "drizzle-orm/mysql2";
import { createConnection } from "mysql2/promise";

/** Brings the schema up to date; two processes at once wait for each other, since MariaDB's DDL is not transactional. */
export async function migrateDatabase(databaseUrl: string, migrationsFolder: string): Promise<void> {
  const connection = await createConnection({ uri: databaseUrl, timezone: "Z" });
  try {
    await connection.query("SELECT GET_LOCK('strandline-migrate', 60)");
    await migrate(drizzle({ client: connection, casing: "snake_case" }), { migrationsFolder });
  } finally {
    await connection.end();
  }
}
