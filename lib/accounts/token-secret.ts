import { createHash, randomBytes } from "node:crypto";

const FORM = /^sl_[A-Za-z0-9_-]{32}$/;
const HINT_LENGTH = 8;

/** Returns a new token secret: `sl_` and 192 random bits as 32 URL-safe characters. */
export function newTokenSecret(): string {
  return `sl_${randomBytes(24).toString("base64url")}`;
}

/** Returns whether the text can be one of our tokens at all. */
export function looksLikeToken(text: string): boolean {
  return FORM.test(text);
}

/** Returns the SHA-256 under which a secret is kept; 192 random bits need no slow hash. */
export function tokenHash(secret: string): string {
  return createHash("sha256").update(secret).digest("hex");
}

/** Returns the first characters, by which a person tells tokens apart. */
export function tokenHint(secret: string): string {
  return secret.slice(0, HINT_LENGTH);
}
