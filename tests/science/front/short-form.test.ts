import { expect, test } from "vitest";
import { decimalsFor, fixed, shortForm } from "@/lib/science/front/short-form";

test.each([
  [1.4231, 0.0521, "1.42(5)"],
  [1.4231, 0.0172, "1.423(17)"],
  [2.9729, 0.0961, "2.97(10)"],
  [2.9729, 0.994, "3.0(10)"],
  [12.34, 3.2, "12(3)"],
  [1234.5, 86, "1235(86)"],
  [-0.021, 0.03, "\u22120.02(3)"],
])("%f ± %f is %s", (value, error, text) => {
  expect(shortForm(value, error)).toBe(text);
});

test("without a usable error two decimals are shown", () => {
  expect([decimalsFor(0), decimalsFor(NaN)]).toEqual([2, 2]);
  expect(fixed(-1, 2)).toBe("\u22121.00");
});
