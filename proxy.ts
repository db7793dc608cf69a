import { NextResponse, type NextRequest } from "next/server";
import { PAGE_PATH_HEADER } from "@/lib/accounts/page-path-header";

/** Tells pages their own path, so that a sign-in leads back to it. */
export function proxy(request: NextRequest) {
  const headers = new Headers(request.headers);
  headers.set(PAGE_PATH_HEADER, request.nextUrl.pathname + request.nextUrl.search);
  return NextResponse.next({ request: { headers } });
}

/** Never the API: matching an upload would buffer and cut its body. */
export const config = { matcher: ["/((?!api/|_next/|favicon).*)"] };
