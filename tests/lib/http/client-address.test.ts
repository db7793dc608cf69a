import { expect, it } from "vitest";
import { clientAddress } from "@/lib/http/client-address";

const of = (forwarded?: string) => clientAddress(new Headers(forwarded === undefined ? {} : { "x-forwarded-for": forwarded }));

it("takes a client's address from the nearest proxy, not from what the client claims before it", () => {
  expect(of("198.51.100.1, 203.0.113.9")).toBe("203.0.113.9");
  expect(of("2001:db8::1")).toBe("2001:db8::1");
  expect(of()).toBe("unknown");
  expect(of("")).toBe("unknown");
});
