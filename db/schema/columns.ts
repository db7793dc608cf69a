import { customType, datetime } from "drizzle-orm/mysql-core";

/** Opaque id: 24 lower-case hex digits, compared byte by byte. */
export const id = customType<{ data: string }>({
  dataType: () => "char(24) character set ascii collate ascii_bin",
});

/** SHA-256 as 64 lower-case hex digits. */
export const sha256 = customType<{ data: string }>({
  dataType: () => "char(64) character set ascii collate ascii_bin",
});

/** JSON text; MariaDB hands it back as a string or an object depending on the query, so both are read. */
export const jsonText = <T>() =>
  customType<{ data: T; driverData: string }>({
    dataType: () => "json",
    toDriver: (value) => JSON.stringify(value),
    fromDriver: (value: unknown) => (typeof value === "string" ? JSON.parse(value) : value) as T,
  });

/** Up to 16 MiB − 1 of bytes; written and read through prepared statements only (see db/blobs.ts). */
export const mediumBlob = customType<{ data: Buffer }>({ dataType: () => "mediumblob" });

/** A moment in UTC with milliseconds. */
export const moment = () => datetime({ fsp: 3, mode: "date" });
