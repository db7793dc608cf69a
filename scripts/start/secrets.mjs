import { randomBytes } from "node:crypto";
import { existsSync, mkdirSync, readFileSync, writeFileSync } from "node:fs";
import path from "node:path";

/** Returns this installation's secrets, made at the first start and readable by their owner only. */
export function readSecrets(dataDirectory) {
  mkdirSync(dataDirectory, { recursive: true, mode: 0o700 });
  const file = path.join(dataDirectory, "secrets.json");
  if (existsSync(file)) return JSON.parse(readFileSync(file, "utf8"));
  const secrets = { session: randomBytes(48).toString("base64url"), database: randomBytes(24).toString("base64url") };
  writeFileSync(file, `${JSON.stringify(secrets, null, 2)}\n`, { mode: 0o600, flag: "wx" });
  return secrets;
}
