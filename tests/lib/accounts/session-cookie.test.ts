import { afterEach, describe, expect, it, vi } from "vitest";
import { forgottenCookie, sealedCookie, sessionCookieIn, setCookieHeader, unsealedSessionId } from "@/lib/accounts/session-cookie";

const SECRET = "a secret of more than thirty-two characters";

afterEach(() => {
  vi.unstubAllEnvs();
  vi.useRealTimers();
});

describe("the session cookie", () => {
  it("gives back the id it seals and does not show it", async () => {
    vi.stubEnv("STRANDLINE_SESSION_SECRET", SECRET);
    const { value } = await sealedCookie("0123456789abcdef01234567");
    expect(value).not.toContain("0123456789abcdef01234567");
    expect(await unsealedSessionId(value)).toBe("0123456789abcdef01234567");
  });

  it("is nothing under another secret, or when it is not a seal", async () => {
    vi.stubEnv("STRANDLINE_SESSION_SECRET", SECRET);
    const { value } = await sealedCookie("0123456789abcdef01234567");
    expect(await unsealedSessionId("Fe26.2*nonsense")).toBeNull();
    expect(await unsealedSessionId("")).toBeNull();
    vi.stubEnv("STRANDLINE_SESSION_SECRET", `another ${SECRET}`);
    expect(await unsealedSessionId(value)).toBeNull();
  });

  it("ends after thirty days even if the browser keeps it", async () => {
    vi.stubEnv("STRANDLINE_SESSION_SECRET", SECRET);
    const { value } = await sealedCookie("0123456789abcdef01234567");
    vi.useFakeTimers({ now: Date.now() + 31 * 24 * 3600_000 });
    expect(await unsealedSessionId(value)).toBeNull();
  });

  it("is marked Secure behind https only", async () => {
    vi.stubEnv("PUBLIC_URL", "https://strandline.example");
    expect(setCookieHeader(forgottenCookie())).toBe("strandline_session=; Path=/; Max-Age=0; HttpOnly; SameSite=Lax; Secure");
    vi.stubEnv("PUBLIC_URL", "http://127.0.0.1:3000");
    expect(setCookieHeader(forgottenCookie())).toBe("strandline_session=; Path=/; Max-Age=0; HttpOnly; SameSite=Lax");
  });

  it("needs a secret in production, and not a short one", async () => {
    vi.stubEnv("NODE_ENV", "production");
    for (const secret of [undefined, "", "short"]) {
      vi.stubEnv("STRANDLINE_SESSION_SECRET", secret);
      await expect(sealedCookie("x")).rejects.toThrow("STRANDLINE_SESSION_SECRET");
    }
  });

  it("is found among other cookies by its whole name", () => {
    expect(sessionCookieIn("theme=night; strandline_session=abc=; x=1")).toBe("abc=");
    expect(sessionCookieIn("not_strandline_session=abc")).toBeNull();
    expect(sessionCookieIn(null)).toBeNull();
  });
});
