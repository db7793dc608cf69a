import { describe, expect, it } from "vitest";
import { halfWayShare, plateauOf, riseOfSwing, swingAt, type Signal } from "@/lib/science/studies/signal-shape";

const signal: Signal = { amplitude: -0.3, levelShare: 0.1, front_us: 200, rise_us: 150, tailShare: 0.4, halfWayRatio: 1.5 };

describe("a signal that swings up and down", () => {
  it("reaches its level at the front, its amplitude a rise later, and then its tail", () => {
    expect(swingAt(signal, 200)).toBeCloseTo(-0.03, 12);
    expect(swingAt(signal, 350)).toBeCloseTo(-0.3, 12);
    expect(swingAt(signal, 5000)).toBeCloseTo(-0.12, 12);
    expect(swingAt(signal, 100)).toBeCloseTo(0, 12);
  });

  it("comes half-way when its rise was taken from there", () => {
    const rise_us = riseOfSwing(60, signal.levelShare);
    expect(swingAt({ ...signal, rise_us }, 260)).toBeCloseTo(-0.3 * halfWayShare(signal.levelShare), 12);
  });
});

describe("a signal that rises for good", () => {
  it("reaches its level at the front, half-way at its ratio, and its amplitude at the end", () => {
    const at = plateauOf(signal, 900, 0.5);
    expect(at(200)).toBeCloseTo(-0.03, 9);
    expect(at(300)).toBeCloseTo(-0.3 * 0.55, 9);
    expect(at(900)).toBeCloseTo(-0.3, 9);
    expect(at(0)).toBe(0);
  });

  it("rises no quicker than spins with a front of that γ can", () => {
    // Power 2/γ = 2 at γ = 1 makes exp(−(d/l)²); a half-way ratio of 1.1 would take a larger one.
    const at = plateauOf({ ...signal, halfWayRatio: 1.1 }, 1e9, 1);
    expect(Math.log(at(400) / -0.3) / Math.log(at(200) / -0.3)).toBeCloseTo(0.25, 6);
  });
});
