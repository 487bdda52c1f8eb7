import { describe, expect, it } from "vitest";
import { canovaHansen } from "../../../stdlib/unitroot/canovaHansen.ts";
import { vonMisesQuantile, vonMisesUpper } from "../../../stdlib/unitroot/vonMises.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { seriesOf } from "../referenceCases.ts";

describe("the generalised von Mises distribution", () => {
  // Canova & Hansen (1995), table 1 (= Hansen 1990): 1%, 5%, 10% points by degrees of freedom.
  it.each([[1, 0.748, 0.47, 0.353], [2, 1.07, 0.749, 0.61], [3, 1.35, 1.01, 0.846], [6, 2.12, 1.68, 1.49], [11, 3.27, 2.75, 2.49]])("has its printed points for %i degrees of freedom", (df, one, five, ten) => {
    expect(Math.abs(vonMisesUpper(one, df) - 0.01)).toBeLessThan(0.0012);
    expect(Math.abs(vonMisesUpper(five, df) - 0.05)).toBeLessThan(0.003);
    expect(Math.abs(vonMisesUpper(ten, df) - 0.1)).toBeLessThan(0.004);
  });
  it("has the finer points of the KPSS table for one", () => {
    // Kwiatkowski, Phillips, Schmidt & Shin (1992), table 1; exact to four digits by MacNeill (1978): 0.46136, 0.74346, 0.34730.
    [[0.3473, 0.1], [0.46136, 0.05], [0.74346, 0.01]].forEach(([x, p]) => expect(vonMisesUpper(x, 1)).toBeCloseTo(p, 5));
  });
  it("turns a probability back into its point, so that the test can print critical values", () => {
    for (const df of [1, 3, 11, 51]) for (const p of [0.1, 0.05, 0.01]) expect(vonMisesUpper(vonMisesQuantile(p, df), df) / p).toBeCloseTo(1, 5);
    // Canova & Hansen (1995), table 1, for months: 2.49, 2.75, 3.27.
    const { critical } = canovaHansen(seriesOf("usaccdeaths"), { length: 12 });
    [["10%", 2.49], ["5%", 2.75], ["1%", 3.27]].forEach(([level, printed]) => expect(Math.abs(critical![level] - Number(printed))).toBeLessThan(0.02));
  });
  it("has mean df / 6", () => {
    for (const df of [1, 4]) {
      let mean = 0;
      for (let x = 0.01; x < 4; x += 0.02) mean += 0.02 * vonMisesUpper(x, df);
      expect(Math.abs(mean - df / 6)).toBeLessThan(0.001);
    }
  });
});

describe("the Canova-Hansen test", () => {
  it("is unchanged by shift and scale, and by a fixed seasonal pattern laid over", () => {
    const x = seriesOf("usaccdeaths"), a = canovaHansen(x, { length: 12 });
    const b = canovaHansen(x.map((v, t) => 500 - 2 * (v + 300 * Math.sin((2 * Math.PI * t) / 12))), { length: 12 });
    expect(b.statistic).toBeCloseTo(a.statistic, 8);
  });
  it("finds the wandering season of the airline passengers, and not one where the pattern is fixed", () => {
    const airline = canovaHansen(makeSeries({ name: "passengers", every: "P1M", start: "1949-01", values: seriesOf("airline").map(Math.log) }));
    expect(airline).toMatchObject({ df: 11, lags: 4, lagRule: "by the short rule, 4 (n/100)^¼ rounded down", status: "ok" });
    expect(airline.p).toBeLessThan(0.05);
    const noise = seriesOf("treering").slice(0, 400).map((v, t) => v + 5 * Math.cos((Math.PI * t) / 2));
    expect(canovaHansen(noise, { length: 4, difference: false }).p).toBeGreaterThan(0.05);
  });
  it("says why it cannot answer", () => {
    expect(canovaHansen(seriesOf("nile")).note).toContain("names no season");
    expect(canovaHansen([1, 2, 3, 4, 5], { length: 4 }).note).toContain("too few");
    expect(canovaHansen(Array.from({ length: 60 }, (_, t) => t % 4), { length: 4 }).note).toContain("exactly");
    expect(() => canovaHansen(seriesOf("nile"), { length: 1 })).toThrow("length is 1");
  });
});
