const LONGEST = 300;

/** Returns a name that is only a name: no folders, no control characters, at most 300 characters; "archive" when nothing is left. */
export function safeFilename(given: string | null | undefined): string {
  const base = (given ?? "").split(/[/\\]/).at(-1) ?? "";
  // Control characters and the marks that turn the direction of text could make a name read as another.
  const printable = [...base.replace(/[\p{Cc}\u202A-\u202E\u2066-\u2069]/gu, "").trim()];
  const name = printable.slice(0, LONGEST).join("").slice(0, LONGEST);
  return name === "" || name === "." || name === ".." ? "archive" : name;
}
