import { bigint, boolean, index, int, mysqlTable, primaryKey, uniqueIndex } from "drizzle-orm/mysql-core";
import { id, mediumBlob, moment, sha256 } from "./columns";
import { groups } from "./groups";

/** Bytes of an uploaded archive, kept once per group and addressed by SHA-256. */
export const blobs = mysqlTable(
  "archive_blobs",
  {
    id: id().primaryKey(),
    groupId: id().notNull().references(() => groups.id),
    /** Null while bytes are still coming in. */
    sha256: sha256(),
    bytes: bigint({ mode: "number" }).notNull(),
    complete: boolean().notNull(),
    createdAt: moment().notNull(),
  },
  (table) => [
    /** De-duplication within a group. */
    uniqueIndex("archive_blobs_by_hash").on(table.groupId, table.sha256),
    /** Sweep of abandoned uploads. */
    index("archive_blobs_incomplete").on(table.complete, table.createdAt),
  ],
);

/** The bytes in chunks of 1 MiB: chunk `seq` holds bytes seq·2²⁰ … */
export const blobChunks = mysqlTable(
  "archive_chunks",
  {
    blobId: id().notNull(),
    seq: int().notNull(),
    data: mediumBlob().notNull(),
  },
  (table) => [primaryKey({ columns: [table.blobId, table.seq] })],
);
