/** Request header in which `proxy.ts` tells a page its own path: a server component is not told otherwise. */
export const PAGE_PATH_HEADER = "x-strandline-path";
