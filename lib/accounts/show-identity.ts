import type { Actor, Role } from "./policy";

export interface ShownIdentity {
  user: { id: string; name: string; email: string };
  group: { id: string; name: string };
  role: Role;
}

export function showIdentity(actor: Actor): ShownIdentity {
  return {
    user: { id: actor.userId, name: actor.userName, email: actor.email },
    group: { id: actor.groupId, name: actor.groupName },
    role: actor.role,
  };
}
