import { mysqlTable } from "drizzle-orm/mysql-core";
import { moment, sha256 } from "./columns";

/** The one-time key with which the first owner sets the portal up; only its hash is kept. */
export const setupKeys = mysqlTable("setup_keys", {
  secretHash: sha256().primaryKey(),
  createdAt: moment().notNull(),
});
