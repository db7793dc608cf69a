import { NextResponse, type NextRequest } from "next/server";
import { PAGE_PATH_HEADER } from "@/lib/accounts/page-path-header";

/** Tells a page its own path, so that signing in can lead back to it. */
export function proxy(request: NextRequest): NextResponse {
  const headers = new Headers(request.headers);
  headers.set(PAGE_PATH_HEADER, request.nextUrl.pathname + request.nextUrl.search);
  return NextResponse.next({ request: { headers } });
}

/** Never the API: a proxied request's body is cloned and cut at 10 MB, which would break uploads. */
export const config = { matcher: ["/((?!api/|_next/).*)"] };
