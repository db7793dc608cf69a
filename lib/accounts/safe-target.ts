const HERE = "http://here.invalid";

/** Returns a path of this site to go on to, or `fallback` when the wish is empty or leads to another site. */
export function safeTarget(wish: string | null | undefined, fallback = "/runs"): string {
  if (!wish || !wish.startsWith("/") || !URL.canParse(wish, HERE)) return fallback;
  const { origin, pathname, search, hash } = new URL(wish, HERE);
  // `/.//elsewhere` has our origin here, but its path alone would name another host.
  return origin === HERE && !pathname.startsWith("//") ? pathname + search + hash : fallback;
}
