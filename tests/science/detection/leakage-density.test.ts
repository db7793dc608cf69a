import { describe, expect, it } from "vitest";
import { componentDensities } from "@/lib/science/detection/component-densities";
import { brightLeakageDensity, darkLeakageDensity } from "@/lib/science/detection/leakage-density";
import { negativeBinomialDensity } from "@/lib/science/detection/negative-binomial-density";
import { poissonDensity } from "@/lib/science/stats/gamma-functions";
import published from "../../fixtures/checks/leakage.json";

/** ε_d and ε_b of the half-integer with the least sum, by plain sums. */
function bestThreshold(law: Parameters<typeof darkLeakageDensity>[1]) {
  let darkUpTo = 0;
  let brightUpTo = 0;
  let best = { theta: -1, falseBright: 1, falseDark: 0 };
  for (let n = 0; n < law.bright; n++) {
    darkUpTo += darkLeakageDensity(n, law);
    brightUpTo += brightLeakageDensity(n, law);
    if (1 - darkUpTo + brightUpTo < best.falseBright + best.falseDark) best = { theta: n, falseBright: 1 - darkUpTo, falseDark: brightUpTo };
  }
  return best;
}

// Values checked by convolution, two quadratures and Monte Carlo: checks, section 1 (leakage; method of Acton et al., quant-ph/0511257).
describe("Poisson counts with leakage during the window", () => {
  const CASES = [
    { law: { dark: 0, bright: 12, leakDark: 0.005, leakBright: 0.002 }, values: published["leak_0.0_12.0_0.005_0.002"] },
    { law: { dark: 0.3, bright: 12, leakDark: 0.005, leakBright: 0.002 }, values: published["leak_0.3_12.0_0.005_0.002"] },
    { law: { dark: 1, bright: 10, leakDark: 0.01, leakBright: 0.004 }, values: published["leak_1.0_10.0_0.01_0.004"] },
  ];

  it.each(CASES)("have the published probabilities, best threshold and error rates for $law", ({ law, values }) => {
    values.dark.forEach((expected, n) => expect(darkLeakageDensity(n, law) / expected).toBeCloseTo(1, 11));
    values.bright.forEach((expected, n) => expect(brightLeakageDensity(n, law) / expected).toBeCloseTo(1, 11));
    const best = bestThreshold(law);
    expect(best.theta).toBe(values.theta);
    expect(best.falseBright).toBeCloseTo(values.eps[0], 12);
    expect(best.falseDark).toBeCloseTo(values.eps[1], 12);
  });

  it("have the published error rates of an ytterbium example", () => {
    const { lambda_d, lambda_b, a_D, a_B, theta, eps_d, eps_b } = published.leak_yb_example;
    const best = bestThreshold({ dark: lambda_d, bright: lambda_b, leakDark: a_D, leakBright: a_B });
    expect(best.theta).toBe(theta);
    expect(best.falseBright).toBeCloseTo(eps_d, 11);
    expect(best.falseDark).toBeCloseTo(eps_b, 11);
  });

  it("add up to 1, at hundreds of counts too, and are the Poisson law without leakage", () => {
    const law = { dark: 60, bright: 300, leakDark: 0.0004, leakBright: 0.0002 };
    const counts = Array.from({ length: 600 }, (_, n) => n);
    expect(counts.reduce((sum, n) => sum + darkLeakageDensity(n, law), 0)).toBeCloseTo(1, 10);
    expect(counts.reduce((sum, n) => sum + brightLeakageDensity(n, law), 0)).toBeCloseTo(1, 10);
    const without = { ...law, leakDark: 0, leakBright: 0 };
    expect(darkLeakageDensity(55, without)).toBeCloseTo(poissonDensity(55, 60), 15);
    expect(brightLeakageDensity(290, without)).toBeCloseTo(poissonDensity(290, 300), 15);
  });
});

describe("the negative binomial law", () => {
  it("adds up to 1 with mean μ and variance μ + ν μ²", () => {
    const probabilities = Array.from({ length: 3000 }, (_, n) => negativeBinomialDensity(n, 40, 0.05));
    const moment = (power: number) => probabilities.reduce((sum, p, n) => sum + p * n ** power, 0);
    expect(moment(0)).toBeCloseTo(1, 10);
    expect(moment(1)).toBeCloseTo(40, 8);
    expect(moment(2) - moment(1) ** 2).toBeCloseTo(40 + 0.05 * 1600, 6);
  });

  it("is geometric at ν = 1 and Poisson at ν = 0", () => {
    expect(negativeBinomialDensity(3, 2, 1)).toBeCloseTo((1 / 3) * (2 / 3) ** 3, 13);
    expect(negativeBinomialDensity(7, 5, 0)).toBe(poissonDensity(7, 5));
    expect(negativeBinomialDensity(0, 0, 0.3)).toBe(1);
  });
});

describe("the densities of fitted components", () => {
  it("follow the model that the parameters name", () => {
    const poisson = { dark: 1, bright: 10, brightWeight: 0.4 };
    expect(componentDensities(poisson).bright(9)).toBe(poissonDensity(9, 10));
    expect(componentDensities({ ...poisson, leakDark: 0.01, leakBright: 0.01 }).dark(3)).toBe(darkLeakageDensity(3, { ...poisson, leakDark: 0.01, leakBright: 0.01 }));
    expect(componentDensities({ ...poisson, darkExcess: 0.1, brightExcess: 0.2 }).bright(9)).toBe(negativeBinomialDensity(9, 10, 0.2));
  });
});
