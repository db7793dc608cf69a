import type { TokenScope } from "@/db/schema/tokens";
import { problem, type Problem } from "@/lib/problem";

export const ROLES = ["reader", "contributor", "analyst", "owner"] as const;
export type Role = (typeof ROLES)[number];

/** Who acts: a member of one group, through a browser session or a script's token. */
export interface Actor {
  userId: string;
  userName: string;
  email: string;
  groupId: string;
  groupName: string;
  role: Role;
  /** What the token allows; a browser session has all scopes. */
  scopes: TokenScope[];
  via: "session" | "token";
  /** The session's or token's own id. */
  credentialId: string;
}

interface Rule {
  /** The lowest role that may; every higher one may too. */
  from: Role;
  scope: TokenScope;
  /** Done by a person at a page only, never by a token. */
  sessionOnly?: true;
}

/** Who may do what. Pages and API both ask this table and nothing else. */
export const POLICY = {
  "account.read": { from: "reader", scope: "read" },
  "session.end": { from: "reader", scope: "read", sessionOnly: true },
  "token.manage": { from: "reader", scope: "read", sessionOnly: true },
  "run.read": { from: "reader", scope: "read" },
  "run.create": { from: "contributor", scope: "upload" },
  "run.update": { from: "contributor", scope: "upload" },
  "run.delete": { from: "analyst", scope: "analyse" },
  "archive.read": { from: "reader", scope: "read" },
  "archive.upload": { from: "contributor", scope: "upload" },
  "job.read": { from: "reader", scope: "read" },
  "job.cancel": { from: "contributor", scope: "upload" },
  "detection.read": { from: "reader", scope: "read" },
  "detection.create": { from: "analyst", scope: "analyse" },
  "analysis.read": { from: "reader", scope: "read" },
  "analysis.create": { from: "analyst", scope: "analyse" },
  "study.create": { from: "analyst", scope: "analyse" },
} as const satisfies Record<string, Rule>;

export type Action = keyof typeof POLICY;

/** Returns whether the actor may do this: role, token scope, and pages-only actions. */
export function may(actor: Actor, action: Action): boolean {
  const rule: Rule = POLICY[action];
  const roleReaches = ROLES.indexOf(actor.role) >= ROLES.indexOf(rule.from);
  const channelFits = actor.via === "session" || (!rule.sessionOnly && actor.scopes.includes(rule.scope));
  return roleReaches && channelFits;
}

/** Returns null when the actor may do this, else the Problem to answer with. */
export function refusal(actor: Actor, action: Action): Problem | null {
  if (may(actor, action)) return null;
  const rule: Rule = POLICY[action];
  if (actor.via === "token" && rule.sessionOnly) return problem("not-allowed", "Tokens cannot do this; sign in on the page.");
  if (actor.via === "token" && !actor.scopes.includes(rule.scope)) {
    return problem("not-allowed", `This needs a token with the scope "${rule.scope}".`);
  }
  return problem("not-allowed", `This needs the role ${rule.from} or higher; yours is ${actor.role}.`);
}
