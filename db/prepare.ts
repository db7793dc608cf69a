import { availableParallelism } from "node:os";
import { Tinypool } from "tinypool";
import type { Actor, Role } from "@/lib/accounts/policy";
import { issueSetupKey } from "@/lib/accounts/setup-key";
import { seedDemoRuns } from "@/lib/analyses/demo-runs";
import { drainQueue } from "@/lib/jobs/drain-queue";
import { closeDatabase, database } from "./connection";
import { migrateDatabase } from "./migrate";
import { users } from "./schema/users";
import { seedAccounts, type SeededAccounts } from "./seed";

/** Before every start: brings the schema up to date and fills an empty database. Prints one line of JSON for the start script. */
async function prepare(): Promise<{ demo: boolean; setupKey: string | null }> {
  const url = process.env.DATABASE_URL;
  if (!url) throw new Error("DATABASE_URL is not set");
  await migrateDatabase(url, "migrations");
  const demo = process.env.STRANDLINE_DEMO !== "0";
  const [anyone] = await database().select({ id: users.id }).from(users).limit(1);
  if (anyone) return { demo, setupKey: null };
  if (!demo) return { demo, setupKey: await issueSetupKey(database()) };
  const accounts = await seedAccounts(database(), process.env.STRANDLINE_DEMO_PASSWORD ?? "low-tide-demo");
  if (accounts) await seedRuns(accounts);
  return { demo, setupKey: null };
}

async function seedRuns(accounts: SeededAccounts): Promise<void> {
  const pool = new Tinypool({ filename: new URL("./thread-task.mjs", import.meta.url).href, maxThreads: Number(process.env.STRANDLINE_THREADS) || availableParallelism() });
  const asMember = (role: Role): Actor => ({
    userId: accounts.userIds[role],
    userName: role,
    email: `${role}@demo.example`,
    groupId: accounts.groupId,
    groupName: "",
    role,
    scopes: ["read", "upload", "analyse"],
    via: "session",
    credentialId: "",
  });
  await seedDemoRuns({ database: database(), contributor: asMember("contributor"), analyst: asMember("analyst"), directory: "sample-data", drain: drainQueue, pool });
  await pool.destroy();
}

prepare()
  .then((outcome) => console.log(JSON.stringify(outcome)))
  .finally(closeDatabase)
  .catch((error: unknown) => {
    console.error(error instanceof Error ? (error.stack ?? error.message) : error);
    process.exitCode = 1;
  });
