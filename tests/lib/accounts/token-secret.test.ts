import { describe, expect, it } from "vitest";
import { looksLikeToken, newTokenSecret, tokenHash, tokenHint } from "@/lib/accounts/token-secret";

describe("a token's secret", () => {
  it("has the form by which it is recognised, and is never the same twice", () => {
    const secrets = Array.from({ length: 200 }, newTokenSecret);
    expect(secrets.every(looksLikeToken)).toBe(true);
    expect(new Set(secrets).size).toBe(200);
  });

  it("is kept as SHA-256", () => {
    // Of "abc": FIPS 180-4, the standard's own example.
    expect(tokenHash("abc")).toBe("ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
  });

  it("gives away five characters as a hint, and no more", () => {
    expect(tokenHint("sl_abcdefgh")).toBe("sl_abcde");
  });
});
