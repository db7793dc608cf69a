import { randomBytes } from "node:crypto";

/** Returns a new opaque id: 96 random bits as 24 hex digits. */
export function newId(): string {
  return randomBytes(12).toString("hex");
}
