import { problem, type Problem } from "@/lib/problem";

const READING = new Set(["GET", "HEAD", "OPTIONS"]);

/**
 * Returns a Problem when a browser says that another site's page makes this state change. A token in the header is
 * never added by a browser on its own, and programs send neither header: both pass.
 */
export function crossSiteProblem(request: Request): Problem | null {
  if (READING.has(request.method) || request.headers.has("authorization")) return null;
  const site = request.headers.get("sec-fetch-site");
  const origin = request.headers.get("origin");
  const siteFits = site === null || site === "same-origin" || site === "none";
  const originFits = origin === null || isOwnOrigin(origin, request.headers.get("host"));
  return siteFits && originFits ? null : problem("not-allowed", "Changes are taken from Strandline's own pages only.");
}

function isOwnOrigin(origin: string, host: string | null): boolean {
  if (!URL.canParse(origin)) return false;
  const publicUrl = process.env.PUBLIC_URL;
  if (publicUrl && URL.canParse(publicUrl) && new URL(publicUrl).origin === origin) return true;
  return new URL(origin).host === host;
}
