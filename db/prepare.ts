import { closeDatabase, database } from "./connection";
import { migrateDatabase } from "./migrate";
import { seedDemo } from "./seed";
import { users } from "./schema/users";
import { issueSetupKey } from "@/lib/accounts/setup-key";

/** Before every start: brings the schema up to date and fills an empty database. Prints one line of JSON for the start script. */
async function prepare(): Promise<{ demo: boolean; setupKey: string | null }> {
  const url = process.env.DATABASE_URL;
  if (!url) throw new Error("DATABASE_URL is not set");
  await migrateDatabase(url, "migrations");
  const [anyone] = await database().select({ id: users.id }).from(users).limit(1);
  const demo = process.env.STRANDLINE_DEMO !== "0";
  if (!anyone && demo) await seedDemo(database(), process.env.STRANDLINE_DEMO_PASSWORD ?? "low-tide-demo");
  return { demo, setupKey: anyone || demo ? null : await issueSetupKey(database()) };
}

prepare()
  .then((outcome) => console.log(JSON.stringify(outcome)))
  .finally(closeDatabase)
  .catch((error: unknown) => {
    console.error(error instanceof Error ? error.message.split("\n")[0] : error);
    process.exitCode = 1;
  });
