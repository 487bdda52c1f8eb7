import { describe, expect, it } from "vitest";
import { boxPierce, ljungBox } from "../../../stdlib/diagnostics/portmanteau.ts";
import { acf, ccf } from "../../../stdlib/correlogram/acf.ts";
import { autocovariance, centre, crossCovariance } from "../../../stdlib/correlogram/autocovariance.ts";
import { bartlettBand, independentBand } from "../../../stdlib/correlogram/bands.ts";
import { pacf } from "../../../stdlib/correlogram/pacf.ts";
import { laggedProducts } from "../../../stdlib/linear/fft.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { agrees, casesOf, dataOf, seriesOf, transformed } from "../referenceCases.ts";

const z95 = 1.959963984540054;

describe("correlations agree with the reference values", () => {
  it.each(casesOf("acf", "acf"))("$id", (c) => {
    const x = dataOf(c), { maxLag, demean } = c.inputs as unknown as { maxLag: number; demean?: boolean };
    const { acf: r, acovf, mean, nObserved, bartlettSe, band95 } = c.expected as Record<string, number[] & number>;
    // One case is taken about zero instead of about the mean.
    const about = demean === false ? { deviations: x, seen: null, mean: 0, observed: x.length } : centre(x);
    const gamma = demean === false ? crossCovariance(about, about, maxLag) : autocovariance(x, maxLag);
    agrees(c, "acovf", gamma, acovf);
    agrees(c, "acf", demean === false ? gamma.map((g) => g / gamma[0]) : acf(x, maxLag), r);
    agrees(c, "mean", centre(x).mean, mean);
    expect(centre(x).observed).toBe(nObserved);
    if (bartlettSe) agrees(c, "bartlettSe", bartlettBand(gamma.map((g) => g / gamma[0]), x.length).slice(1).map((b) => b / z95), bartlettSe);
    if (band95) agrees(c, "band95", independentBand(x.length, 0.95), band95);
  });
  it.each(casesOf("acf", "pacf"))("$id", (c) => {
    agrees(c, "pacf", pacf(dataOf(c), (c.inputs as unknown as { maxLag: number }).maxLag).slice(1), c.expected.pacf);
  });
  it.each(casesOf("acf", "pacfOls"))("$id", (c) => {
    agrees(c, "pacf", pacf(dataOf(c), (c.inputs as unknown as { maxLag: number }).maxLag, "regression").slice(1), c.expected.pacf);
  });
  it.each(casesOf("acf", "ccf"))("$id", (c) => {
    const { maxLag, with: other, withTransform } = c.inputs as unknown as { maxLag: number; with: string; withTransform: unknown[] };
    const x = dataOf(c), y = transformed(seriesOf(other), withTransform);
    // The reference's lag k is x at t + k with y at t: ours is index k of ccf(y, x), and of ccf(x, y) for negative lags.
    const both = [...Array.from(ccf(x, y, maxLag)).reverse().slice(0, -1), ...ccf(y, x, maxLag)];
    agrees(c, "ccf", both, c.expected.ccf);
  });
  it.each(casesOf("acf", "portmanteau"))("$id", (c) => {
    const { lags, modelDf } = c.inputs as unknown as { lags: number[]; modelDf: number };
    const x = dataOf(c);
    for (const [name, test] of [["ljungBox", ljungBox], ["boxPierce", boxPierce]] as const) {
      const expected = c.expected[name] as { statistic: number[]; df: number[]; pValue: (number | null)[] };
      const results = lags.map((lag) => test(x, lag, modelDf));
      agrees(c, "statistic", results.map((r) => r.statistic), expected.statistic);
      results.forEach((r, i) => {
        if (expected.pValue[i] === null) {
          expect(r.df).toBeNull();
          expect(r.note).toContain("none left");
        } else {
          expect(r.df).toBe(expected.df[i]);
          // Relative to itself: a p-value of 1e-200 must be right to its digits. Below 1e-280 the reference itself rounds.
          expect(Math.abs(r.p - Number(expected.pValue[i]))).toBeLessThanOrEqual(1e-300 + (c.tolerance.rel ?? 0) * 20 * Number(expected.pValue[i]));
        }
      });
    }
  });
});

describe("published values", () => {
  it.each(casesOf("published", "published").filter((c) => /numacc|nist_/.test(c.id)))("$id: certified lag-1 autocorrelation", (c) => {
    const { lag1 } = c.expected.published as { lag1: number };
    // Certified to 15 digits in exact arithmetic; the data of numacc3 and numacc4 are not representable in doubles (about 5e-9).
    const allowed = /numacc[34]/.test(c.id) ? 2e-8 : 1e-12;
    expect(Math.abs(acf(seriesOf(String(c.series)), 1)[1] - lag1)).toBeLessThanOrEqual(allowed);
  });
});

describe("correlations by hand, by law and at the edge", () => {
  it("autocovariances of 1, 2, 3 by hand", () => {
    expect(Array.from(autocovariance([1, 2, 3], 2))).toEqual([2 / 3, 0, -1 / 3]);
  });
  it("acf does not change when the data are shifted, scaled or reversed", () => {
    const x = seriesOf("lynx"), r = acf(x, 20);
    const others = [x.map((v) => 7 * v - 300), Float64Array.from(x).reverse()];
    for (const other of others) acf(other, 20).forEach((v, k) => expect(v).toBeCloseTo(r[k], 12));
  });
  it("the transform and the blocks give the same sums, with and without gaps", () => {
    const x = seriesOf("treering");
    const direct = autocovariance(x, 120);
    autocovariance(x, 400).slice(0, 121).forEach((v, k) => expect(Math.abs(v - direct[k])).toBeLessThan(1e-13));
    const gaps = x.map((v, i) => (i % 17 === 3 ? NaN : v));
    const some = autocovariance(gaps, 120);
    autocovariance(gaps, 400).slice(0, 121).forEach((v, k) => expect(Math.abs(v - some[k])).toBeLessThan(1e-12));
  });
  it("lagged products by hand", () => {
    const s = laggedProducts(Float64Array.of(1, 2, 3), Float64Array.of(1, 10, 100), 2);
    [321, 210, 100].forEach((v, k) => expect(s[k]).toBeCloseTo(v, 9));
  });
  it("the three partial autocorrelations agree in a long series, within a standard error of 1 / sqrt(2500)", () => {
    const x = seriesOf("sim_arma21_long");
    const [a, b, c] = [pacf(x, 5), pacf(x, 5, "regression"), pacf(x, 5, "burg")];
    for (let k = 0; k <= 5; k++) { expect(Math.abs(a[k] - b[k])).toBeLessThan(0.02); expect(Math.abs(a[k] - c[k])).toBeLessThan(0.02); }
  });
  it("Burg's partial autocorrelations give the published AR(2) of the lake levels", () => {
    // Brockwell & Davis (2002), example 5.1.4: 1.0449, -0.2456.
    const p = pacf(seriesOf("lakehuron"), 2, "burg");
    expect(p[1] * (1 - p[2])).toBeCloseTo(1.0449, 4);
    expect(p[2]).toBeCloseTo(-0.2456, 4);
  });
  it("cross-correlations are of the periods that both series have", () => {
    const months = (start: string, values: number[]) => makeSeries({ name: start, every: "P1M", start, values });
    const x = months("2020-01", [9, 4, 7, 1, 5, 8]), y = months("2020-03", [2, 6, 3, 1, 7]);
    expect(Array.from(ccf(x, y, 2))).toEqual(Array.from(ccf([7, 1, 5, 8], [2, 6, 3, 1], 2)));
    expect(() => ccf(x, months("2021-01", [1, 2, 3]), 1)).toThrow("2020-01 (2020-01 to 2020-06) and 2021-01 (2021-01 to 2021-03) share no period");
  });
  it("constant values have no correlation, and lags out of range are refused in words", () => {
    expect(acf([3, 3, 3], 1)[1]).toBeNaN();
    expect(() => acf([1, 2, 3], 3)).toThrow("expected a whole number from 0 to 2 for 3 values");
    expect(() => acf([], 0)).toThrow("no values");
    expect(() => ccf([1, 2], [1, 2, 3], 1)).toThrow("bare numbers have no dates to align them by");
    expect(() => pacf([1, NaN, 3, 4], 1, "burg")).toThrow("without gaps");
    expect(ljungBox([5, 5, 5, 5], 2)).toMatchObject({ status: "unavailable", p: NaN });
    expect(ljungBox([5, 5, 5, 5], 2).note).toContain("the same");
  });
});
