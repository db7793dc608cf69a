import { z } from "zod";

/** An opaque id in a path; another form is answered like an unknown one. */
export const Id = z.string().regex(/^[0-9a-f]{24}$/);
