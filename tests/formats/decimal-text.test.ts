import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { decimalNumber, whyNotANumber } from "@/lib/formats/decimal-text";

describe("numbers in text", () => {
  it("shifts the decimal point, so that ms are µs exactly", () => {
    expect(decimalNumber("0.049565", 3)).toBe(49.565);
    expect(decimalNumber("1.1", 6)).toBe(1_100_000);
    expect(decimalNumber("5e-3", 3)).toBe(5);
    expect(decimalNumber(".5", 3)).toBe(500);
  });

  it("reads any time of up to 12 digits the same in µs, ms and s", () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 999_999_999_999 }), fc.integer({ min: 0, max: 9 }), fc.constantFrom(3, 6), (digits, places, tens) => {
        const written = (point: number): string => `${digits}e-${point}`;
        expect(decimalNumber(written(places + tens), tens)).toBe(Number(written(places)));
      }),
    );
  });

  it("forgives a writer that divided by 1000 in binary", () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 99_999_999 }), (thousandths) => {
        const time_us = thousandths / 1000;
        expect(decimalNumber(String(time_us * 0.001), 3)).toBe(time_us);
      }),
    );
  });

  it("takes no text that is not a finite decimal number, and no negative zero", () => {
    for (const text of ["", "abc", "1,5", "0x10", "1e", "Infinity", "1e400", "--1", "1 2", "NaN"]) expect(decimalNumber(text)).toBeNull();
    expect(Object.is(decimalNumber("-0"), 0)).toBe(true);
  });

  it("says how to write a decimal comma", () => {
    expect(whyNotANumber("5,25")).toContain("5.25");
    expect(whyNotANumber("x".repeat(100))).toHaveLength('""…'.length + 40 + " is not a number".length);
  });
});
