const RUN_BY_SPREADSHEETS = /^[=+\-@\t\r]/;

/** Returns a text as a CSV cell (RFC 4180); text that a spreadsheet would run as a formula gets an apostrophe before it. */
export function csvText(text: string): string {
  const safe = RUN_BY_SPREADSHEETS.test(text) ? `'${text}` : text;
  return /[",;\t\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/** Returns a number as a CSV cell with all its digits; null and NaN are empty. */
export function csvNumber(value: number | null): string {
  return value === null || Number.isNaN(value) ? "" : String(value);
}

/**
 * Returns a text as a comment line. Spreadsheets know no comments and cut the line into cells: a piece they would run as a formula
 * gets an apostrophe before it, and quotes become apostrophes, so that no quote hides where a cell begins.
 */
export function csvComment(text: string): string {
  return `# ${text.replaceAll('"', "'").replace(/([,;\t] *)(?=[=+\-@])/g, "$1'")}`;
}
