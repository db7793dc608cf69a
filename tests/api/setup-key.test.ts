import { sql } from "drizzle-orm";
import { afterAll, beforeEach, describe, expect, it } from "vitest";
import { closeDatabase, connect, database } from "@/db/connection";
import { memberships } from "@/db/schema/memberships";
import { setupKeys } from "@/db/schema/setup-keys";
import { users } from "@/db/schema/users";
import { passwordMatches } from "@/lib/accounts/password";
import { issueSetupKey, redeemSetupKey } from "@/lib/accounts/setup-key";
import { isProblem } from "@/lib/problem";

const shared = globalThis as typeof globalThis & { strandlineDatabase?: ReturnType<typeof connect> };
const OWNER = { groupName: "Kelp Point Laboratory", name: "Runa Fathom", email: "Runa@kelp.example", password: "spring-tide-1" };

/** A single connection whose temporary tables hide the real ones: an empty portal beside the filled one. */
beforeEach(async () => {
  await closeDatabase();
  shared.strandlineDatabase = connect(process.env.DATABASE_URL ?? "", 1);
  for (const table of ["users", "setup_keys", "member_groups", "memberships"]) {
    await database().execute(sql.raw(`create temporary table empty_${table} like ${table}`));
    await database().execute(sql.raw(`alter table empty_${table} rename to ${table}`));
  }
});
afterAll(closeDatabase);

async function issued(): Promise<string> {
  const key = await issueSetupKey(database());
  if (key === null) throw new Error("no key for an empty portal");
  return key;
}

describe("the set-up key of an empty portal", () => {
  it("makes the first group and its owner", async () => {
    const made = await redeemSetupKey({ key: await issued(), ...OWNER });
    if (isProblem(made)) throw new Error(made.detail);
    const [user] = await database().select().from(users);
    expect(user).toMatchObject({ id: made.userId, email: "runa@kelp.example", name: "Runa Fathom" });
    expect(await passwordMatches(OWNER.password, user.passwordHash)).toBe(true);
    expect(await passwordMatches("spring-tide-2", user.passwordHash)).toBe(false);
    expect(await database().select().from(memberships)).toMatchObject([{ groupId: made.groupId, userId: made.userId, role: "owner" }]);
  });

  it("works once, and none is issued afterwards", async () => {
    const key = await issued();
    await redeemSetupKey({ key, ...OWNER });
    expect(await redeemSetupKey({ key, ...OWNER, email: "other@kelp.example" })).toMatchObject({ code: "not-found" });
    expect(await issueSetupKey(database())).toBeNull();
    expect(await database().select().from(users)).toHaveLength(1);
  });

  it("is replaced by a later one, and kept as a hash", async () => {
    const earlier = await issued();
    const later = await issued();
    expect(JSON.stringify(await database().select().from(setupKeys))).not.toContain(later);
    expect(await redeemSetupKey({ key: earlier, ...OWNER })).toMatchObject({ code: "not-found" });
    expect(isProblem(await redeemSetupKey({ key: later, ...OWNER }))).toBe(false);
  });

  it("is not used up by a form with a mistake, which is named", async () => {
    const key = await issued();
    const refused = await redeemSetupKey({ key, ...OWNER, password: "too short", groupName: " " });
    expect(refused).toMatchObject({ code: "invalid-input" });
    expect(isProblem(refused) && refused.errors.map(({ where }) => where)).toEqual(["groupName", "password"]);
    expect(isProblem(await redeemSetupKey({ key, ...OWNER }))).toBe(false);
  });
});
