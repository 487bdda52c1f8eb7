import { describe, expect, it } from "vitest";
import { cusum, largestBreak, supremumP } from "../../../stdlib/diagnostics/breaks.ts";
import { archLM, mcleodLi } from "../../../stdlib/diagnostics/changingVariance.ts";
import { cumulativePeriodogram, kolmogorovUpper } from "../../../stdlib/diagnostics/cumulativePeriodogram.ts";
import { durbinWatson } from "../../../stdlib/diagnostics/durbinWatson.ts";
import { jarqueBera } from "../../../stdlib/diagnostics/jarqueBera.ts";
import { monti } from "../../../stdlib/diagnostics/portmanteau.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { agrees, casesOf, dataOf, seriesOf, type Case } from "../referenceCases.ts";
import { standardInnovations, type ModelCase } from "./standardInnovations.ts";

/** The data of a case, or the standardised innovations of the model it names. */
function tested(c: Case): Float64Array {
  return c.inputs.model === undefined ? dataOf(c) : standardInnovations(dataOf(c), c.inputs as unknown as ModelCase);
}
const lagsOf = (c: Case): unknown => c.inputs.lags;

describe("residual tests agree with the reference values", () => {
  it.each(casesOf("diagnostics", "jarqueBera"))("$id", (c) => {
    const t = jarqueBera(tested(c)), e = c.expected as unknown as Record<string, number>;
    agrees(c, "statistic", t.statistic, e.statistic);
    agrees(c, "pValue", t.p, e.pValue);
    agrees(c, "skewness", t.skewness!, e.skewness);
    agrees(c, "kurtosis", t.kurtosis!, e.kurtosis);
    expect(t.n).toBe(e.n);
  });
  it.each(casesOf("diagnostics", "durbinWatson"))("$id", (c) => agrees(c, "statistic", durbinWatson(tested(c)), c.expected.statistic));
  it.each(casesOf("diagnostics", "archLM"))("$id", (c) => {
    const t = archLM(tested(c), Number(lagsOf(c))), e = c.expected as unknown as Record<string, number>;
    agrees(c, "lm", t.statistic, e.lm);
    agrees(c, "lmPValue", t.p, e.lmPValue);
    agrees(c, "f", t.f!, e.f);
    agrees(c, "fPValue", t.fP!, e.fPValue);
    expect(t.n).toBe(e.nUsed);
  });
  it.each(casesOf("diagnostics", "mcleodLi"))("$id", (c) => {
    const x = tested(c), results = (lagsOf(c) as number[]).map((lag) => mcleodLi(x, lag));
    agrees(c, "statistic", results.map((r) => r.statistic), c.expected.statistic);
    agrees(c, "pValue", results.map((r) => r.p), c.expected.pValue);
  });
  it.each(casesOf("diagnostics", "cumPeriodogram"))("$id", (c) => {
    const t = cumulativePeriodogram(tested(c), Number((c.inputs as { taper?: number }).taper ?? 0));
    const e = c.expected as unknown as { m: number; cumulative: number[]; maxDeviation: number; critical95: number };
    agrees(c, "cumulative", t.cumulative!, e.cumulative);
    agrees(c, "maxDeviation", t.statistic, e.maxDeviation);
    agrees(c, "critical95", t.critical95!, e.critical95);
    expect(t.cumulative).toHaveLength(e.m);
    expect(t.p < 0.05).toBe(t.statistic > t.critical95!);
  });
});

describe("residual tests by hand, by law and at the edge", () => {
  it("the Kolmogorov tail has its tabulated 10%, 5% and 1% points (Smirnov 1948)", () => {
    expect(kolmogorovUpper(1.2238)).toBeCloseTo(0.1, 4);
    expect(kolmogorovUpper(1.3581)).toBeCloseTo(0.05, 4);
    expect(kolmogorovUpper(1.6276)).toBeCloseTo(0.01, 4);
    expect(kolmogorovUpper(0.1)).toBe(1);
  });
  it("says the critical values of the chi-square distribution (R's qchisq) and no bound", () => {
    const noise = Float64Array.from({ length: 60 }, (_, t) => Math.sin(t * t * 12.9898)), printed = { "10%": 15.9871791721053, "5%": 18.3070380532751, "1%": 23.2092511589544 };
    for (const test of [monti(noise, 10), archLM(noise, 10), mcleodLi(noise, 10)]) {
      for (const [level, value] of Object.entries(printed)) expect(test.critical![level]).toBeCloseTo(value, 10);
      expect(test.bound).toBe(null);
    }
  });
  it("Monti's test by hand: n(n + 2) sum of p_k^2 / (n - k)", () => {
    // 1..4: r1 = 0.25, r2 = -0.3; p1 = 0.25, p2 = (r2 - r1^2) / (1 - r1^2) = -0.3625 / 0.9375.
    expect(monti([1, 2, 3, 4], 2).statistic).toBeCloseTo(24 * (0.0625 / 3 + (0.3625 / 0.9375) ** 2 / 2), 12);
  });
  it("Durbin-Watson by hand", () => expect(durbinWatson([1, -1, 1, -1])).toBe(3));
  it("the river's largest break is at 1899, as published", () => {
    // Cobb (1978); the Wald statistic by hand from the two means and the pooled variance.
    const values = seriesOf("nile");
    const series = makeSeries({ name: "flow", every: "P1Y", start: "1871", values });
    const t = largestBreak(series);
    expect(t.at).toBe("1899");
    const mean = (a: Float64Array): number => a.reduce((s, v) => s + v, 0) / a.length;
    const [a, b] = [values.slice(0, 28), values.slice(28)];
    const rss = (x: Float64Array): number => x.reduce((s, v) => s + (v - mean(x)) ** 2, 0);
    expect(t.statistic).toBeCloseTo((100 * (rss(values) - rss(a) - rss(b))) / (rss(a) + rss(b)), 8);
    expect([t.before, t.after]).toEqual([expect.closeTo(mean(a), 8), expect.closeTo(mean(b), 8)]);
    expect(t.p).toBeLessThan(1e-10);
    expect(cusum(series).furthest).toBe("1898");
    expect(cusum(series).statistic).toBeCloseTo((28 * (mean(a) - mean(values))) / Math.sqrt(rss(values)), 8);
  });
  it("the largest-break p-value has the published 10%, 5% and 1% points (Andrews 2003, trimming 0.15)", () => {
    expect(Math.abs(supremumP(7.12, 0.15) - 0.1)).toBeLessThan(0.003);
    expect(Math.abs(supremumP(8.68, 0.15) - 0.05)).toBeLessThan(0.001);
    expect(Math.abs(supremumP(12.16, 0.15) - 0.01)).toBeLessThan(0.001);
  });
  it("no test answers constants, or too little", () => {
    for (const x of [[], [1], [1, 2], [2, 2, 2, 2, 2, 2, 2, 2, 2, 2]]) {
      for (const test of [jarqueBera, cusum, largestBreak, cumulativePeriodogram, archLM, (v: number[]) => mcleodLi(v, 1)]) {
        expect(test(x), `${test.name} of ${x.length}`).toMatchObject({ status: "unavailable", p: NaN });
      }
    }
    expect(durbinWatson([0, 0])).toBeNaN();
  });
  it("gaps: pairs and rows that are complete are used, and a periodogram says that it cannot", () => {
    const x = seriesOf("sim_white").map((v, i) => (i % 50 === 7 ? NaN : v));
    expect(jarqueBera(x).n).toBe(490);
    expect(archLM(x, 2).n).toBe(500 - 2 - 30);
    expect(mcleodLi(x, 5).status).toBe("ok");
    expect(cumulativePeriodogram(x).note).toContain("10 of 500 values are missing");
  });
});
