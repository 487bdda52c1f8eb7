import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import { moveSpan, seriesPath, spanIndexes, typedTime } from "../../../runtime/page/windowControl.ts";

const months = Array.from({ length: 36 }, (_, i) => `${2019 + Math.floor(i / 12)}-${String(1 + i % 12).padStart(2, "0")}`);
const numbered = Array.from({ length: 120 }, (_, i) => String(i + 1));

describe("spanIndexes", () => {
  it("takes both ends in, and a partial date for its whole period", () => {
    expect(spanIndexes(months, { from: "2019-03", to: "2020-02" })).toEqual({ first: 2, last: 13 });
    expect(spanIndexes(months, { from: "2020", to: "2020" })).toEqual({ first: 12, last: 23 });
    expect(spanIndexes(months, { from: "2001", to: "2099" })).toEqual({ first: 0, last: 35 });
  });
  it("orders a numbered series by number", () => {
    expect(spanIndexes(numbered, { from: "9", to: "100" })).toEqual({ first: 8, last: 99 });
  });
});

describe("moveSpan", () => {
  it("moves one end or both, in steps of a period", () => {
    const span = { from: "2019-03", to: "2020-02" };
    expect(moveSpan(months, span, "from", 2)).toEqual({ from: "2019-05", to: "2020-02" });
    expect(moveSpan(months, span, "to", -1)).toEqual({ from: "2019-03", to: "2020-01" });
    expect(moveSpan(months, span, "both", 3)).toEqual({ from: "2019-06", to: "2020-05" });
  });
  it("stays within the series, keeps two periods, and keeps its length when moved whole", () => {
    fc.assert(fc.property(fc.nat(34), fc.nat(34), fc.integer({ min: -200, max: 200 }), fc.constantFrom("from", "to", "both"), (a, b, steps, grip) => {
      const [first, last] = [Math.min(a, b), Math.max(a, b) + 1];
      const moved = moveSpan(months, { from: months[first], to: months[last] }, grip as "from", steps);
      const now = spanIndexes(months, moved);
      expect(now.first).toBeGreaterThanOrEqual(0); expect(now.last).toBeLessThan(36); expect(now.last - now.first).toBeGreaterThanOrEqual(1);
      if (grip === "both") expect(now.last - now.first).toBe(last - first);
    }), { seed: 7 });
  });
});

describe("typedTime", () => {
  it("reads a whole or a partial date, by the end that it is for", () => {
    expect(typedTime(months, " 2020-05 ", "from")).toBe("2020-05");
    expect(typedTime(months, "2020", "from")).toBe("2020-01");
    expect(typedTime(months, "2020", "to")).toBe("2020-12");
    expect(typedTime(months, "1999", "to")).toBeNull();
    expect(typedTime(months, "", "to")).toBeNull();
  });
});

describe("seriesPath", () => {
  it("draws few values one by one, and lifts the pen at a gap", () => {
    expect(seriesPath(Float64Array.of(0, 1, NaN, 1))).toBe("M0.0 95.0L333.3 5.0M1000.0 5.0");
  });
  it("keeps the extremes of a long series", () => {
    const long = new Float64Array(50_000); long[31_234] = 1; long[40_001] = -1;
    const path = seriesPath(long);
    expect(path).toContain(" 5.0"); expect(path).toContain(" 95.0");
    expect(path.length).toBeLessThan(20_000);
  });
  it("draws a constant series, and none at all, without a fault", () => {
    expect(seriesPath(Float64Array.of(2, 2))).toBe("M0.0 95.0L1000.0 95.0");
    expect(seriesPath(new Float64Array(0))).toBe("");
    expect(seriesPath(Float64Array.of(NaN))).toBe("");
  });
});
