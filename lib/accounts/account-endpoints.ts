import { z } from "zod";
import { endpoint } from "@/lib/http/endpoint";
import { Id } from "@/lib/http/id-params";
import { PageQuery } from "@/lib/http/page-query";
import { ROLES } from "./policy";
import { CreateTokenInput, ScopeField, TokenAnswer } from "./token-schemas";

const Identity = z.object({
  user: z.object({ id: z.string(), name: z.string(), email: z.string() }),
  group: z.object({ id: z.string(), name: z.string() }),
  role: z.enum(ROLES),
});

export const signInEndpoint = endpoint({
  method: "POST",
  path: "/api/v1/session",
  action: "public",
  summary: "Sign in with a mail address and password; sets the session cookie",
  body: z.object({ email: z.string().min(1).max(254), password: z.string().min(1).max(1000) }),
  answers: { 200: { description: "Signed in", schema: Identity } },
  example: { email: "nobody@demo.example", password: "not a password" },
});

export const signOutEndpoint = endpoint({
  method: "DELETE",
  path: "/api/v1/session",
  action: "session.end",
  summary: "Sign out: ends the session, here and in every copy of its cookie",
  answers: { 204: { description: "Signed out" } },
});

export const meEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/me",
  action: "account.read",
  summary: "Who asks: member, group, role, and what the token may do",
  answers: { 200: { description: "The acting member", schema: Identity.extend({ scopes: z.array(ScopeField) }) } },
});

export const createTokenEndpoint = endpoint({
  method: "POST",
  path: "/api/v1/tokens",
  action: "token.manage",
  summary: "Make a token for a script; its secret is shown this once",
  body: CreateTokenInput,
  answers: { 201: { description: "The token with its secret", schema: TokenAnswer.extend({ token: z.string() }) } },
  example: { name: "apparatus", scopes: ["read", "upload"], expiresInDays: 90 },
});

export const listTokensEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/tokens",
  action: "token.manage",
  summary: "Your own tokens, newest first, without secrets",
  query: PageQuery,
  answers: {
    200: { description: "A page of tokens", schema: z.object({ items: z.array(TokenAnswer), nextCursor: z.string().nullable() }) },
  },
});

export const revokeTokenEndpoint = endpoint({
  method: "DELETE",
  path: "/api/v1/tokens/{id}",
  action: "token.manage",
  summary: "Revoke one of your own tokens",
  params: z.object({ id: Id }),
  answers: { 204: { description: "Revoked" } },
});
