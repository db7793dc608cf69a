import { describe, expect, it } from "vitest";
import type { TokenScope } from "@/db/schema/tokens";
import { may, POLICY, refusal, ROLES, type Action, type Actor, type Role } from "@/lib/accounts/policy";

const ALL: TokenScope[] = ["read", "upload", "analyse"];

function actor(role: Role, via: "session" | "token" = "session", scopes = ALL): Actor {
  return { userId: "u", userName: "U", email: "u@test.example", groupId: "g", groupName: "G", role, scopes, via, credentialId: "c" };
}

/** Written out by hand, so that a slip in the policy is seen: action, roles that may, scope, whether a token may. */
const EXPECTED: [Action, Role[], TokenScope, boolean][] = [
  ["account.read", ["reader", "contributor", "analyst", "owner"], "read", true],
  ["session.end", ["reader", "contributor", "analyst", "owner"], "read", false],
  ["token.manage", ["reader", "contributor", "analyst", "owner"], "read", false],
  ["run.read", ["reader", "contributor", "analyst", "owner"], "read", true],
  ["run.create", ["contributor", "analyst", "owner"], "upload", true],
  ["run.update", ["contributor", "analyst", "owner"], "upload", true],
  ["run.delete", ["analyst", "owner"], "analyse", true],
  ["archive.read", ["reader", "contributor", "analyst", "owner"], "read", true],
  ["archive.upload", ["contributor", "analyst", "owner"], "upload", true],
  ["job.read", ["reader", "contributor", "analyst", "owner"], "read", true],
  ["job.cancel", ["contributor", "analyst", "owner"], "upload", true],
  ["detection.read", ["reader", "contributor", "analyst", "owner"], "read", true],
  ["detection.create", ["analyst", "owner"], "analyse", true],
  ["analysis.read", ["reader", "contributor", "analyst", "owner"], "read", true],
  ["analysis.create", ["analyst", "owner"], "analyse", true],
  ["study.create", ["analyst", "owner"], "analyse", true],
];

describe("the policy", () => {
  it("has a written expectation for every action", () => {
    expect(EXPECTED.map(([action]) => action).sort()).toEqual(Object.keys(POLICY).sort());
  });

  it.each(EXPECTED)("lets %s be done by %j", (action, roles, scope, byToken) => {
    for (const role of ROLES) {
      expect(may(actor(role), action)).toBe(roles.includes(role));
      expect(may(actor(role, "token", [scope]), action)).toBe(byToken && roles.includes(role));
      expect(may(actor(role, "token", ALL.filter((other) => other !== scope)), action)).toBe(false);
      expect(refusal(actor(role), action)?.code ?? null).toBe(roles.includes(role) ? null : "not-allowed");
    }
  });

  it("says what is missing", () => {
    expect(refusal(actor("reader"), "run.create")?.detail).toBe("This needs the role contributor or higher; yours is reader.");
    expect(refusal(actor("owner", "token", ["read"]), "run.create")?.detail).toBe('This needs a token with the scope "upload".');
    expect(refusal(actor("owner", "token"), "token.manage")?.detail).toBe("Tokens cannot do this; sign in on the page.");
  });
});
