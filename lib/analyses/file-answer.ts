/** Returns a file for download: never run by a browser, never kept by intermediaries. */
export function fileAnswer(content: string | Uint8Array, contentType: string, filename: string): Response {
  const body = typeof content === "string" ? content : new Uint8Array(content);
  return new Response(body, {
    headers: {
      "content-type": contentType,
      "content-disposition": `attachment; filename="${filename}"`,
      "content-security-policy": "default-src 'none'; style-src 'unsafe-inline'; sandbox",
      "x-content-type-options": "nosniff",
      "cache-control": "private, no-store",
    },
  });
}
