import "server-only";
import { cookies, headers } from "next/headers";
import { redirect } from "next/navigation";
import { cache } from "react";
import { actorOfSessionCookie } from "./find-actor";
import { PAGE_PATH_HEADER } from "./page-path-header";
import type { Actor } from "./policy";
import { safeTarget } from "./safe-target";
import { SESSION_COOKIE } from "./session-cookie";

/** Returns the member signed in in this browser, or null; looked up once a request. */
export const currentActor = cache(async (): Promise<Actor | null> => {
  const cookie = (await cookies()).get(SESSION_COOKIE)?.value;
  return cookie ? actorOfSessionCookie(cookie) : null;
});

/** Returns the signed-in member; sends everybody else to the sign-in page, which leads back here. */
export async function requireActor(): Promise<Actor> {
  const actor = await currentActor();
  if (actor) return actor;
  const here = safeTarget((await headers()).get(PAGE_PATH_HEADER), "");
  redirect(here ? `/sign-in?next=${encodeURIComponent(here)}` : "/sign-in");
}
