import "server-only";
import { createGroup } from "@/lib/accounts/create-group";
import { createMember } from "@/lib/accounts/create-member";
import { hashPassword } from "@/lib/accounts/password";
import type { Role } from "@/lib/accounts/policy";
import { isProblem } from "@/lib/problem";
import type { Database } from "./connection";
import { users } from "./schema/users";
import { inTransaction } from "./transaction";

/** The invented laboratory of the demo. */
const DEMO_GROUP = "Skerry Bay Laboratory";
const DEMO_MEMBERS: { role: Role; name: string; email: string }[] = [
  { role: "owner", name: "Maren Tidewell", email: "owner@demo.example" },
  { role: "analyst", name: "Oskar Lindqvane", email: "analyst@demo.example" },
  { role: "contributor", name: "Ines Calderay", email: "contributor@demo.example" },
  { role: "reader", name: "Tobin Ashgrave", email: "reader@demo.example" },
];

export interface SeededAccounts {
  groupId: string;
  userIds: Record<Role, string>;
}

/** Makes the demo group with a member of each role, all with the given password; null, and nothing done, when somebody has an account. */
export async function seedAccounts(database: Database, demoPassword: string): Promise<SeededAccounts | null> {
  const passwordHash = await hashPassword(demoPassword);
  return inTransaction(database, async (transaction) => {
    if ((await transaction.select({ id: users.id }).from(users).limit(1)).length > 0) return null;
    const groupId = await createGroup(transaction, DEMO_GROUP);
    const userIds: Record<Role, string> = { owner: "", analyst: "", contributor: "", reader: "" };
    for (const member of DEMO_MEMBERS) {
      const userId = await createMember(transaction, { ...member, groupId, passwordHash });
      if (isProblem(userId)) throw new Error(`the demo member ${member.email} is there already`);
      userIds[member.role] = userId;
    }
    return { groupId, userIds };
  });
}
