import { z } from "zod";

/** Where a page of a list, newest first, ended. */
export interface Cursor {
  createdAt: Date;
  id: string;
}

const CURSOR_FORM = /^(\d{1,15}):([0-9a-f]{24})$/;

/** `?cursor=&limit=` of a list that is ordered by creation, newest first. */
export const PageQuery = z.object({
  cursor: z
    .string()
    .transform((text, context): Cursor => {
      const parts = CURSOR_FORM.exec(Buffer.from(text, "base64url").toString("latin1"));
      if (parts) return { createdAt: new Date(Number(parts[1])), id: parts[2] };
      context.addIssue({ code: "custom", message: "take it from the `nextCursor` of the page before" });
      return z.NEVER;
    })
    .optional(),
  limit: z.coerce.number().int().min(1).max(200).default(50),
});

export interface Page<T> {
  items: T[];
  nextCursor: string | null;
}

/** Returns the page of `limit` items from rows that were read one beyond it. */
export function pageOf<Row extends Cursor, T>(rows: Row[], limit: number, show: (row: Row) => T): Page<T> {
  const kept = rows.slice(0, limit);
  const last = kept.at(-1);
  return { items: kept.map(show), nextCursor: rows.length > limit && last ? cursorText(last) : null };
}

function cursorText({ createdAt, id }: Cursor): string {
  return Buffer.from(`${createdAt.getTime()}:${id}`, "latin1").toString("base64url");
}
