import { describe, expect, it } from "vitest";
import { crossingsOf } from "@/lib/science/front/analyse-front";
import { DEFAULT_FRONT_RULE, type CrossingMethod } from "@/lib/science/front/front-rule";
import { mean, standardDeviation } from "@/lib/science/stats/intervals";
import { measureCone, type Cone } from "./simulated-cone";

const REPEATS = 400;
const DISTANCES = [2, 5, 10];
const times = Array.from({ length: 28 }, (_, k) => ((k + 0.5) * 150) / 28);

/** A straight cone whose tenth of the maximum is 1.3 standard errors. */
function cone(times_us: number[]): Cone {
  return { distances: DISTANCES, times_us, front_us: (distance) => 10 * distance, rise_us: 40, amplitude: 0.4, noise: 0.03 };
}

/** Crossing times minus those of the same traces without noise, `[distance][repeat]`, µs. */
function misses(method: CrossingMethod, times_us: number[]): number[][] {
  const rule = { ...DEFAULT_FRONT_RULE, method };
  const clean = crossingsOf(measureCone({ ...cone(times_us), noise: 1e-12 }, 1, 1), rule);
  const found = Array.from({ length: REPEATS }, (_, repeat) => crossingsOf(measureCone(cone(times_us), 1, repeat + 5), rule));
  return DISTANCES.map((_, j) => found.flatMap((crossings) => (crossings[j].status === "resolved" ? [crossings[j].time_us - clean[j].time_us] : [])));
}

describe("crossing times read from noise", () => {
  it("come early by isotonic, the more so the longer the flat stretch before the rise", () => {
    const [near, middle, far] = misses("isotonic", times).map((values) => mean(values));
    expect(near).toBeLessThan(-0.6);
    expect(middle).toBeLessThan(near - 0.5);
    expect(far).toBeLessThan(middle - 0.5);
    expect(far).toBeGreaterThan(-5.5);
  });

  it("come half as early when the window starts shortly before the front", () => {
    const whole = mean(misses("isotonic", times)[2]);
    const late = mean(misses("isotonic", times.filter((time) => time > 70))[2]);
    expect(late / whole).toBeGreaterThan(0.3);
    expect(late / whole).toBeLessThan(0.75);
  });

  it("have hardly any bias and the least scatter by the last upcrossing", () => {
    const scatter = (method: CrossingMethod) => standardDeviation(misses(method, times)[2]);
    misses("last-upcrossing", times).forEach((values) => expect(Math.abs(mean(values))).toBeLessThan(0.9));
    expect(scatter("last-upcrossing")).toBeLessThan(0.7 * scatter("isotonic"));
    expect(scatter("isotonic")).toBeLessThan(0.6 * scatter("first"));
  });
});
