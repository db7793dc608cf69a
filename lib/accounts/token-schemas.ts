import { z } from "zod";
import type { TokenScope } from "@/db/schema/tokens";
import { NameField } from "./account-fields";

const SCOPES = ["read", "upload", "analyse"] as const satisfies readonly TokenScope[];

export const ScopeField = z.enum(SCOPES);

/** Form and API alike. */
export const CreateTokenInput = z.strictObject({
  name: NameField,
  scopes: z
    .array(ScopeField)
    .min(1, "choose at least one scope")
    .refine((scopes) => new Set(scopes).size === scopes.length, "names a scope twice"),
  expiresInDays: z.number().int().min(1).max(366),
});
export type CreateTokenInput = z.output<typeof CreateTokenInput>;

export const TokenAnswer = z.object({
  id: z.string(),
  name: z.string(),
  scopes: z.array(ScopeField),
  hint: z.string().meta({ description: "The secret's first characters" }),
  createdAt: z.iso.datetime(),
  expiresAt: z.iso.datetime(),
  lastUsedAt: z.iso.datetime().nullable(),
});
