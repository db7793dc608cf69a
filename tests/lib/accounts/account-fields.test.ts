import { describe, expect, it } from "vitest";
import { EmailField, NameField, PasswordField } from "@/lib/accounts/account-fields";

describe("a password", () => {
  it("has at least ten characters, counted as a person counts them", () => {
    expect(PasswordField.safeParse("123456789").success).toBe(false);
    expect(PasswordField.safeParse("1234567890").success).toBe(true);
    expect(PasswordField.safeParse("🌊".repeat(9)).success).toBe(false);
    expect(PasswordField.safeParse("🌊".repeat(10)).success).toBe(true);
  });

  it("has no more bytes than the hash reads", () => {
    expect(PasswordField.safeParse("x".repeat(72)).success).toBe(true);
    expect(PasswordField.safeParse("x".repeat(73)).success).toBe(false);
    expect(PasswordField.safeParse("µ".repeat(37)).success).toBe(false);
  });
});

describe("a mail address", () => {
  it("is kept in lower case without blanks around it", () => {
    expect(EmailField.parse("  Owner@Demo.Example ")).toBe("owner@demo.example");
  });

  it.each(["", "owner", "owner@", "@demo.example", "a b@demo.example", `${"x".repeat(250)}@demo.example`])("is refused as %j", (text) => {
    expect(EmailField.safeParse(text).success).toBe(false);
  });
});

describe("a name", () => {
  it("is not blank", () => {
    expect(NameField.parse(" Skerry Bay ")).toBe("Skerry Bay");
    expect(NameField.safeParse("   ").success).toBe(false);
  });
});
