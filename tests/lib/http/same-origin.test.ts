import { afterEach, describe, expect, it, vi } from "vitest";
import { crossSiteProblem } from "@/lib/http/same-origin";

function from(headers: Record<string, string>, method = "POST") {
  return crossSiteProblem(new Request("http://127.0.0.1:3000/api/v1/runs", { method, headers: { host: "127.0.0.1:3000", ...headers } }));
}

afterEach(() => vi.unstubAllEnvs());

describe("a state change", () => {
  it("passes from our own page, and from a program that sends neither header", () => {
    expect(from({})).toBeNull();
    expect(from({ origin: "http://127.0.0.1:3000" })).toBeNull();
    expect(from({ origin: "http://127.0.0.1:3000", "sec-fetch-site": "same-origin" })).toBeNull();
  });

  it.each<Record<string, string>>([
    { origin: "http://127.0.0.1:3001" },
    { origin: "https://elsewhere.example" },
    { origin: "null" },
    { origin: "127.0.0.1:3000" },
    { "sec-fetch-site": "cross-site" },
    { "sec-fetch-site": "same-site" },
    { origin: "http://127.0.0.1:3000", "sec-fetch-site": "cross-site" },
    { origin: "https://elsewhere.example", "sec-fetch-site": "same-origin" },
  ])("is refused with %j", (headers) => {
    expect(from(headers)?.code).toBe("not-allowed");
  });

  it("passes from the public address when a proxy in front hides it", () => {
    vi.stubEnv("PUBLIC_URL", "https://strandline.example/");
    expect(from({ origin: "https://strandline.example" })).toBeNull();
    expect(from({ origin: "http://strandline.example" })?.code).toBe("not-allowed");
  });

  it("passes with a token, which no browser adds by itself", () => {
    expect(from({ authorization: "Bearer x", origin: "https://elsewhere.example" })).toBeNull();
  });
});

describe("reading", () => {
  it("passes from anywhere", () => {
    expect(from({ origin: "https://elsewhere.example", "sec-fetch-site": "cross-site" }, "GET")).toBeNull();
  });
});
