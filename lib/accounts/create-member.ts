import "server-only";
import { newId } from "@/db/new-id";
import { memberships } from "@/db/schema/memberships";
import { users } from "@/db/schema/users";
import { databaseErrorCode, type Executor } from "@/db/transaction";
import { problem, type Problem } from "@/lib/problem";
import { EmailField } from "./account-fields";
import type { Role } from "./policy";

export interface NewMember {
  groupId: string;
  name: string;
  email: string;
  role: Role;
  /** From `hashPassword`. */
  passwordHash: string;
}

/** Makes a person's account and its membership, and returns the user id; `conflict` when the address has an account. Run it in a transaction. */
export async function createMember(executor: Executor, member: NewMember): Promise<string | Problem> {
  const userId = newId();
  const createdAt = new Date();
  const email = EmailField.parse(member.email);
  try {
    await executor.insert(users).values({ id: userId, email, name: member.name, passwordHash: member.passwordHash, createdAt });
  } catch (error) {
    if (databaseErrorCode(error) !== "ER_DUP_ENTRY") throw error;
    return problem("conflict", "This mail address already has an account.", [{ where: "email", message: "already has an account" }]);
  }
  await executor.insert(memberships).values({ groupId: member.groupId, userId, role: member.role, createdAt });
  return userId;
}
