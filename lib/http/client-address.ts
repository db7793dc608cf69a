/** Returns the address a request came from, as the nearest proxy or our own server wrote it last, or "unknown". */
export function clientAddress(headers: Headers): string {
  return headers.get("x-forwarded-for")?.split(",").at(-1)?.trim() || "unknown";
}
