import "server-only";
import { compare, hash } from "bcryptjs";

const COST = 12;

/** Of a random password nobody kept: an unknown address costs the same time as a known one. */
const NOBODYS_HASH = "$2b$12$NTJtEdwVP8WxCx9xmOIESuibllK8EBqk0WFrxmfh3L/3AKMiyVVx.";

/** Returns the bcrypt hash of a password that has passed `PasswordField`. */
export function hashPassword(password: string): Promise<string> {
  return hash(password, COST);
}

/** Returns whether the password belongs to the hash; null, for nobody, takes as long and is always false. */
export async function passwordMatches(password: string, passwordHash: string | null): Promise<boolean> {
  const matches = await compare(password, passwordHash ?? NOBODYS_HASH);
  return matches && passwordHash !== null;
}
