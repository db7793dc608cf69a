import "server-only";
import { createHash, randomBytes } from "node:crypto";
import { eq } from "drizzle-orm";
import { z } from "zod";
import { database, type Database } from "@/db/connection";
import { setupKeys } from "@/db/schema/setup-keys";
import { users } from "@/db/schema/users";
import { inTransaction, type Executor, type Transaction } from "@/db/transaction";
import { schemaProblem } from "@/lib/http/schema-problem";
import { isProblem, problem, type Problem } from "@/lib/problem";
import { EmailField, NameField, PasswordField } from "./account-fields";
import { createGroup } from "./create-group";
import { createMember } from "./create-member";
import { hashPassword } from "./password";

export const RedeemSetupKeyInput = z.strictObject({
  key: z.string().max(200),
  groupName: NameField,
  name: NameField,
  email: EmailField,
  password: PasswordField,
});
export type RedeemSetupKeyInput = z.input<typeof RedeemSetupKeyInput>;

/** Returns a new one-time key for the first owner, which replaces an earlier one; null when somebody has an account already. */
export async function issueSetupKey(database: Database): Promise<string | null> {
  if (await anyAccount(database)) return null;
  const key = randomBytes(24).toString("base64url");
  await inTransaction(database, async (transaction) => {
    await transaction.delete(setupKeys);
    await transaction.insert(setupKeys).values({ secretHash: hashOf(key), createdAt: new Date() });
  });
  return key;
}

/** Makes the first group and its owner, once. Problems: `invalid-input` by field; `not-found` for a key that is unknown or used. */
export async function redeemSetupKey(given: RedeemSetupKeyInput): Promise<{ groupId: string; userId: string } | Problem> {
  const parsed = RedeemSetupKeyInput.safeParse(given);
  if (!parsed.success) return schemaProblem(parsed.error, "body");
  const { key, groupName, name, email, password } = parsed.data;
  const passwordHash = await hashPassword(password);
  return inTransaction(database(), async (transaction) => {
    if (!(await useUp(transaction, key))) return problem("not-found", "This set-up link is unknown or has been used.");
    const groupId = await createGroup(transaction, groupName);
    const userId = await createMember(transaction, { groupId, name, email, role: "owner", passwordHash });
    return isProblem(userId) ? userId : { groupId, userId };
  });
}

/** The row's lock makes a second redeemer wait and then find nothing. */
async function useUp(transaction: Transaction, key: string): Promise<boolean> {
  const [row] = await transaction.select().from(setupKeys).where(eq(setupKeys.secretHash, hashOf(key))).for("update");
  if (!row || (await anyAccount(transaction))) return false;
  await transaction.delete(setupKeys);
  return true;
}

async function anyAccount(executor: Executor): Promise<boolean> {
  return (await executor.select({ id: users.id }).from(users).limit(1)).length > 0;
}

function hashOf(key: string): string {
  return createHash("sha256").update(key).digest("hex");
}
