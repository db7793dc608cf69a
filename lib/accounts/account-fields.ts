import { z } from "zod";

export const LEAST_PASSWORD_CHARACTERS = 10;
/** bcrypt reads no further; a longer password would be cut without a word. */
const MOST_PASSWORD_BYTES = 72;

export const EmailField = z.string().trim().toLowerCase().pipe(z.email("not a mail address").max(254));
export const NameField = z.string().trim().min(1, "may not be empty").max(120);
export const PasswordField = z
  .string()
  .refine((text) => [...text].length >= LEAST_PASSWORD_CHARACTERS, `needs at least ${LEAST_PASSWORD_CHARACTERS} characters`)
  .refine((text) => new TextEncoder().encode(text).length <= MOST_PASSWORD_BYTES, `may have at most ${MOST_PASSWORD_BYTES} bytes`);
