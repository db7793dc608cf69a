import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { byteCount, fixedNumber, groupedCount, longForm, plainNumber, withUncertainty } from "@/lib/number-text";

/** Reads a short form back: sign, digits, and the power of ten when there is one. */
function numberIn(text: string): number {
  const [digits, power] = text.replace("\u2212", "-").split("\u202f×\u202f10");
  const exponent = (power ?? "").replace("⁻", "-").replace(/[⁰¹²³⁴⁵⁶⁷⁸⁹]/g, (digit) => String("⁰¹²³⁴⁵⁶⁷⁸⁹".indexOf(digit)));
  return Number(digits.replace(/\(.*/, "")) * 10 ** Number(exponent);
}

// The short form 1.42(5) is common practice (no source); the two-digit rule for errors that begin with 1 as well.
describe("a value with its uncertainty", () => {
  it("carries the error in units of the last digit shown", () => {
    expect(withUncertainty(1.4231, 0.0521)).toBe("1.42(5)");
    expect(withUncertainty(0.3363, 0.00357)).toBe("0.336(4)");
  });

  it("keeps two digits of an error that begins with 1", () => {
    expect(withUncertainty(1.4231, 0.0149)).toBe("1.423(15)");
    expect(withUncertainty(1.4231, 0.0996)).toBe("1.42(10)");
    expect(withUncertainty(1.4231, 0.196)).toBe("1.4(2)");
  });

  it("rounds whole tens when the error is above ten", () => {
    expect(withUncertainty(12345, 234)).toBe("12300(200)");
    expect(withUncertainty(74.58, 9.47)).toBe("75(9)");
  });

  it("has a typeset minus and no minus zero", () => {
    expect(withUncertainty(-0.0121, 0.003)).toBe("\u22120.012(3)");
    expect(fixedNumber(-0.0004, 2)).toBe("0.00");
  });

  it("falls back to the plain number without a usable error, and to a dash without a value", () => {
    expect(withUncertainty(1.5, null)).toBe("1.5");
    expect(withUncertainty(1.5, 0)).toBe("1.5");
    expect(withUncertainty(null, 0.1)).toBe("–");
    expect(withUncertainty(Number.NaN, 0.1)).toBe("–");
  });

  it("never shows a value further from the true one than the error", () => {
    fc.assert(
      fc.property(fc.double({ min: -1e4, max: 1e4, noNaN: true }), fc.double({ min: 1e-6, max: 1e3, noNaN: true }), (value, error) => {
        const shown = numberIn(withUncertainty(value, error));
        expect(Math.abs(shown - value)).toBeLessThanOrEqual(error * 0.51);
      }),
    );
  });
});

describe("numbers in text", () => {
  it("says infinity where an interval has no upper end", () => {
    expect(longForm(1.5, 0.1, 1.3, null)).toBe("1.5 ± 0.1 (95 %: 1.3 … ∞)");
    expect(plainNumber(-Infinity)).toBe("\u2212∞");
  });

  it("groups thousands with thin spaces", () => {
    expect(groupedCount(1234567)).toBe("1\u202f234\u202f567");
  });

  it("counts bytes in powers of ten", () => {
    expect(byteCount(0)).toBe("0\u00a0B");
    expect(byteCount(2_147_483_648)).toBe("2.15\u00a0GB");
  });
});

describe("very small values", () => {
  it("are written in powers of ten", () => {
    expect(withUncertainty(1.02e-6, 1.8e-6)).toBe("1.0(18)\u202f×\u202f10⁻⁶");
    expect(withUncertainty(-4.2e-12, 3e-13)).toBe("\u22124.2(3)\u202f×\u202f10⁻¹²");
  });
});

describe("plain numbers", () => {
  it("below a thousandth are written in powers of ten", () => {
    expect(plainNumber(0.0000017, 2)).toBe("1.7\u202f×\u202f10⁻⁶");
    expect(plainNumber(0.0012, 2)).toBe("0.0012");
    expect(plainNumber(0)).toBe("0");
  });
});
