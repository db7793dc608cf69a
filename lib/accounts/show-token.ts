import type { tokens, TokenScope } from "@/db/schema/tokens";

type TokenRow = Pick<typeof tokens.$inferSelect, "id" | "name" | "scopes" | "hint" | "createdAt" | "expiresAt" | "lastUsedAt">;

/** A token as lists show it: without its secret. */
export interface ShownToken {
  id: string;
  name: string;
  scopes: TokenScope[];
  hint: string;
  createdAt: string;
  expiresAt: string;
  lastUsedAt: string | null;
}

export function showToken(row: TokenRow): ShownToken {
  return {
    id: row.id,
    name: row.name,
    scopes: row.scopes,
    hint: row.hint,
    createdAt: row.createdAt.toISOString(),
    expiresAt: row.expiresAt.toISOString(),
    lastUsedAt: row.lastUsedAt?.toISOString() ?? null,
  };
}
