import { describe, expect, it } from "vitest";
import { adf } from "../../../stdlib/unitroot/adf.ts";
import { kpss } from "../../../stdlib/unitroot/kpss.ts";
import { dickeyFullerCritical, dickeyFullerP, type Trend } from "../../../stdlib/unitroot/mackinnon.ts";
import { phillipsPerron } from "../../../stdlib/unitroot/phillipsPerron.ts";
import { agrees, casesOf, dataOf, seriesOf } from "../referenceCases.ts";

const trends: Record<string, Trend> = { n: "none", c: "constant", ct: "linear", ctt: "quadratic" };
interface Inputs { regression: string; lags: number; autolag?: string; maxLag?: number; table: string; nobs: number[] }

describe("unit-root tests agree with the reference values", () => {
  it.each(casesOf("unitroot", "adf"))("$id", (c) => {
    const { regression, lags, autolag, maxLag } = c.inputs as unknown as Inputs;
    const test = adf(dataOf(c), { trend: trends[regression], lags: autolag ? (autolag.toLowerCase() as "aic" | "bic") : lags, maxLags: maxLag });
    const e = c.expected as unknown as { statistic: number; pValue: number; lags: number; nUsed: number; criticalValues: Record<string, number> };
    agrees(c, "statistic", test.statistic, e.statistic);
    agrees(c, "pValue", test.p, e.pValue);
    expect([test.lags, test.n]).toEqual([e.lags, e.nUsed]);
    for (const [level, value] of Object.entries(e.criticalValues)) agrees(c, level, test.critical![level], value);
  });
  it.each(casesOf("unitroot", "kpss"))("$id", (c) => {
    const { regression, lags } = c.inputs as unknown as Inputs;
    const test = kpss(dataOf(c), { trend: trends[regression] as "constant" | "linear", bandwidth: lags });
    const e = c.expected as unknown as { statistic: number; pValue: number; longRunVariance: number };
    agrees(c, "statistic", test.statistic, e.statistic);
    agrees(c, "pValue", test.p, e.pValue);
    agrees(c, "longRunVariance", test.longRunVariance!, e.longRunVariance);
    expect(test.bound).toBe(e.pValue === 0.01 ? "below" : e.pValue === 0.1 ? "above" : null);
  });
  it.each(casesOf("unitroot", "pp"))("$id", (c) => {
    const { regression, lags } = c.inputs as unknown as Inputs;
    const test = phillipsPerron(dataOf(c), { trend: trends[regression], bandwidth: lags });
    const e = c.expected as unknown as { zTau: number; zAlpha: number; gamma0: number; longRunVariance: number; pValueTau: number };
    agrees(c, "zTau", test.statistic, e.zTau);
    agrees(c, "zAlpha", test.zAlpha!, e.zAlpha);
    agrees(c, "gamma0", test.gamma0!, e.gamma0);
    agrees(c, "longRunVariance", test.longRunVariance!, e.longRunVariance);
    agrees(c, "pValueTau", test.p, e.pValueTau);
  });
  it.each(casesOf("unitroot", "tables").filter((c) => (c.inputs as unknown as Inputs).table.startsWith("mackinnon")))("$id", (c) => {
    const { table, regression } = c.inputs as unknown as Inputs, trend = trends[regression];
    if (table === "mackinnon2010") {
      for (const { nobs, values } of c.expected.criticalValues as unknown as { nobs: number; values: number[] }[]) {
        agrees(c, "values", ["1%", "5%", "10%"].map((level) => dickeyFullerCritical(trend, nobs)[level as "1%"]), values);
      }
    } else {
      for (const { statistic, p } of c.expected.pValue as unknown as { statistic: number; p: number }[]) agrees(c, "p", dickeyFullerP(trend, statistic), p);
    }
  });
  it.each(casesOf("published", "published").filter((c) => c.id.startsWith("published-np")))("$id: Nelson & Plosser (1982), table 5", (c) => {
    const { compute, published } = { compute: c.inputs.compute, published: c.expected.published } as unknown as { compute: { inputs: { lags: number } }; published: { tau: number } };
    expect(adf(dataOf(c), { trend: "linear", lags: compute.inputs.lags }).statistic).toBeCloseTo(published.tau, 3);
  });
  it("critical values agree with the older printed table within 0.02 (Fuller 1976, table 8.5.2)", () => {
    for (const [trend, n, value] of [["constant", 100, -2.89], ["linear", 100, -3.45], ["none", 100, -1.95], ["constant", 25, -3]] as const) {
      expect(Math.abs(dickeyFullerCritical(trend, n)["5%"] - value)).toBeLessThan(0.02);
    }
  });
});

describe("unit-root tests by law and at the edge", () => {
  it("do not change when the series is shifted or scaled", () => {
    const x = seriesOf("lynx"), y = x.map((v) => -3 * v + 1e6);
    for (const test of [adf, kpss, phillipsPerron]) expect(test(y).statistic / test(x).statistic).toBeCloseTo(1, 8);
  });
  it.each([
    ["nothing", []], ["one value", [3]], ["two values", [3, 4]], ["a constant", Array.from({ length: 50 }, () => 2)],
    ["a straight line", Array.from({ length: 50 }, (_, t) => 2 * t + 1)], ["a gap inside", Array.from({ length: 50 }, (_, t) => (t === 20 ? NaN : Math.sin(t)))],
  ])("say why %s cannot be answered", (_, x) => {
    for (const test of [adf, phillipsPerron]) {
      const result = test(x, { trend: "linear" });
      expect(result).toMatchObject({ status: "unavailable", p: NaN });
      expect(result.sentence).toMatch(/^The data cannot answer: .+\.$/);
    }
    expect(kpss(x, { trend: "linear" }).status).toBe("unavailable");
  });
  it("leave missing ends off and say so", () => {
    const x = seriesOf("nile"), padded = [NaN, ...x, NaN, NaN];
    expect(adf(padded)).toMatchObject({ statistic: adf(x).statistic, note: "3 missing values at the ends left off" });
  });
  it("refuse what they do not know, in words", () => {
    expect(() => adf([1, 2, 3], { trend: "ct" as Trend })).toThrow('adf: trend is "ct", expected "none", "constant", "linear" or "quadratic"');
    expect(() => adf(seriesOf("nile"), { lags: -1 })).toThrow("lags is -1");
    expect(() => adf(seriesOf("nile"), { maxLags: 60 })).toThrow("from 0 to 48");
    expect(() => kpss(seriesOf("nile"), { bandwidth: 100 })).toThrow("from 0 to 99");
    expect(() => kpss(seriesOf("nile"), { bandwidth: "wide" as "long" })).toThrow('bandwidth is "wide"');
  });
  it("a sentence names the decision and its p-value, and claims no proof", () => {
    expect(adf(seriesOf("nile"), { lags: 0 }).sentence).toBe("The augmented Dickey-Fuller test rejects a unit root at the 5% level (p < 0.001), in favour of a series that is stationary around a constant.");
    expect(adf(seriesOf("sim_rw")).sentence).toContain("no proof");
    expect(kpss(seriesOf("sim_rw")).sentence).toBe("The KPSS test rejects stationarity around a constant at the 5% level (p < 0.01).");
    expect(kpss(seriesOf("sim_white")).sentence).toContain("(p > 0.10); that is no proof of it.");
  });
});
