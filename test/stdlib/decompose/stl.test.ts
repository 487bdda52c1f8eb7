import { describe, expect, it } from "vitest";
import { seasonalStrength } from "../../../stdlib/decompose/seasonalStrength.ts";
import { stl } from "../../../stdlib/decompose/stl.ts";
import { agrees, casesOf, dataOf, seriesOf } from "../referenceCases.ts";

interface Inputs { period: number; seasonalWindow: number | "periodic"; robust: boolean; trendWindow?: number; lowpassWindow?: number; seasonalDegree?: 0 | 1; jump?: number }

describe("stl agrees with the reference values", () => {
  it.each(casesOf("decomposition", "stl"))("$id", (c) => {
    const { period, seasonalWindow, robust, trendWindow, lowpassWindow, seasonalDegree, jump } = c.inputs as unknown as Inputs;
    const d = stl(dataOf(c), { length: period, seasonalWindow, robust, trendWindow, lowPassWindow: lowpassWindow, seasonalDegree, jump });
    const e = c.expected as unknown as Record<string, number[]> & { windows: { seasonal: number; trend: number; lowpass: number } };
    expect(d.windows).toEqual({ seasonal: e.windows.seasonal, trend: e.windows.trend, lowPass: e.windows.lowpass });
    agrees(c, "trend", d.trend, e.trend);
    agrees(c, "seasonal", d.seasonal, e.seasonal);
    agrees(c, "remainder", d.remainder, e.remainder);
    if (e.weights) agrees(c, "weights", d.weights, e.weights);
  });
});

describe("stl by law and at the edge", () => {
  it("gives back a level plus a fixed pattern exactly", () => {
    const pattern = [3, -1, -4, 2] /* sums to 0 */, x = Array.from({ length: 48 }, (_, t) => 10 + pattern[t % 4]);
    const d = stl(x, { length: 4, seasonalWindow: "periodic" });
    d.seasonal.forEach((v, t) => expect(v).toBeCloseTo(pattern[t % 4], 9));
    d.remainder.forEach((v) => expect(Math.abs(v)).toBeLessThan(1e-9));
  });
  it("says why it cannot, and refuses windows that are not odd", () => {
    expect(stl([1, 2, 3, 4, 5], { length: 4 }).note).toBe("5 values are fewer than two seasons of 4");
    expect(stl([1, NaN, 3, 4, 5, 6, 7, 8], { length: 4 }).note).toContain("gaps");
    expect(() => stl(seriesOf("airline"), { length: 12, seasonalWindow: 8 })).toThrow("an odd number from 3 on");
    expect(() => stl(seriesOf("airline"))).toThrow("names no season");
  });
  it("strength is near one for the airline passengers and small for noise", () => {
    expect(seasonalStrength(seriesOf("airline").map(Math.log), 12)!.seasonal).toBeGreaterThan(0.9);
    expect(seasonalStrength(seriesOf("sim_white"), 12)!.seasonal).toBeLessThan(0.35);
    expect(seasonalStrength([1, 1, 1, 1, 1, 1], 2)).toBeNull();
  });
});
