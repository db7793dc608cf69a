import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { inTransaction } from "@/db/transaction";
import { createGroup } from "@/lib/accounts/create-group";
import { createMember } from "@/lib/accounts/create-member";
import { hashPassword } from "@/lib/accounts/password";
import type { Role } from "@/lib/accounts/policy";
import { isProblem } from "@/lib/problem";
import { signedIn, type Credentials } from "./client";

export const PASSWORD = "slack-water-at-noon";

let passwordHash: Promise<string> | null = null;

export interface Member {
  userId: string;
  groupId: string;
  email: string;
  role: Role;
}

export interface SignedInMember extends Member {
  credentials: Credentials;
}

/** Makes a group nobody else uses. */
export function makeGroup(): Promise<string> {
  return createGroup(database(), `Group ${newId()}`);
}

/** Makes a member with an address of its own; the password is `PASSWORD`. */
export async function makeMember(groupId: string, role: Role): Promise<Member> {
  const email = `${role}-${newId()}@test.example`;
  const hash = await (passwordHash ??= hashPassword(PASSWORD));
  const userId = await inTransaction(database(), (transaction) =>
    createMember(transaction, { groupId, name: `Test ${role}`, email, role, passwordHash: hash }),
  );
  if (isProblem(userId)) throw new Error(userId.detail);
  return { userId, groupId, email, role };
}

/** Makes a member and signs it in. */
export async function makeSignedIn(groupId: string, role: Role): Promise<SignedInMember> {
  const member = await makeMember(groupId, role);
  return { ...member, credentials: await signedIn(member.email, PASSWORD) };
}
