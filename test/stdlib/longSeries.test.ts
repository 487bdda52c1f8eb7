import { beforeAll, describe, expect, it } from "vitest";
import { leastSquares } from "../../stdlib/linear/leastSquares.ts";
import { pacf } from "../../stdlib/correlogram/pacf.ts";
import { lambdaProfile, likelihood } from "../../stdlib/decompose/lambda.ts";
import { outliers } from "../../stdlib/diagnostics/outliers.ts";
import { patternOf, patternProducts, type OutlierType } from "../../stdlib/diagnostics/outlierPattern.ts";
import { normals, seeded } from "../../stdlib/forecast/random.ts";
import { fit, makeSeries } from "../../stdlib/index.ts";
import { adf } from "../../stdlib/unitroot/adf.ts";
import { differences } from "../../stdlib/unitroot/differences.ts";
import { dickeyFullerFit } from "../../stdlib/unitroot/dickeyFullerRegression.ts";
import type { Trend } from "../../stdlib/unitroot/mackinnon.ts";
import { seriesOf } from "./referenceCases.ts";

/** An invented hourly load with a day, a week and memory. */
function hourly(n: number, seed = 3): Float64Array {
  const draw = normals(seeded(seed));
  let u = 0;
  return Float64Array.from({ length: n }, (_, t) => { u = 0.9 * u + draw(); return 200 + 30 * Math.sin((2 * Math.PI * t) / 24) + 10 * Math.sin((2 * Math.PI * t) / 168) + u; });
}

const load = makeSeries({ name: "load", unit: "MW", every: "hour", start: "2020-01-01T00:00Z", values: hourly(20_000) });

/** Processor time in ms, so that a crowded machine does not decide. */
function processorMs(work: () => unknown): number {
  const { user, system } = process.cpuUsage();
  work();
  const now = process.cpuUsage({ user, system });
  return (now.user + now.system) / 1000;
}

describe("20,000 hourly values cost no more than a few regressions on 24 harmonics", () => {
  let regression = 0;
  beforeAll(() => {
    const X = Float64Array.from({ length: 20_000 * 24 }, (_, i) => Math.cos(i * 1.7)), work = () => leastSquares(X, load.values, 20_000, 24);
    work();
    regression = Math.min(processorMs(work), processorMs(work), processorMs(work));
  });
  // Before cross products and filters took the place of repeated reflections and sums: 350, 180, 40 and 17 regressions.
  it.each([
    ["Box-Cox lambda by likelihood with a season", 25, () => lambdaProfile(load, "likelihood", { regression: "season" })],
    ["partial autocorrelations by 72 regressions", 12, () => pacf(load, 72, "regression")],
    ["six ways of differencing, each with its tests", 20, () => differences(load, 24)],
    ["the search for outliers", 10, () => outliers(model)],
  ] as const)("%s", (_, most, work) => {
    expect(processorMs(work)).toBeLessThan(most * regression);
  });
  const model = fit({ series: load, ar: 1, season: { length: 24, ar: 1 } });
});

describe("what is computed from cross products is what the columns themselves give", () => {
  const series = { nile: seriesOf("nile"), gdp: seriesOf("realgdp"), walk: seriesOf("sim_rw"), co2: seriesOf("co2"), hourly: hourly(1500) };
  const trends: Trend[] = ["none", "constant", "linear", "quadratic"];
  it.each(Object.entries(series))("the Dickey-Fuller statistic of %s", (_, y) => {
    for (const trend of trends) for (const lags of [0, 1, 12]) {
      const { fit: columns } = dickeyFullerFit(y, trend, lags), t = columns.beta[0] / columns.se[0];
      expect(Math.abs(adf(y, { trend, lags }).statistic / t - 1)).toBeLessThan(1e-8);
    }
  });
  it("the Dickey-Fuller statistic of a series that a straight line hides", () => {
    const y = hourly(400).map((v, t) => v + 1e6 * t), plain = adf(hourly(400), { trend: "linear", lags: 3 }).statistic;
    expect(adf(y, { trend: "linear", lags: 3 }).statistic).toBeCloseTo(plain, 5); // ten of sixteen digits went into the line
  });
  it("partial autocorrelations by regression, with gaps: the last coefficient on complete rows", () => {
    const x = hourly(600).map((v, t) => (t % 97 === 40 || (t > 300 && t < 306) ? NaN : v)), partial = pacf(x, 30, "regression");
    for (const k of [1, 2, 7, 24, 30]) {
      const rows = Array.from({ length: x.length - k }, (_, i) => i + k).filter((t) => Array.from({ length: k + 1 }, (_, j) => x[t - j]).every((v) => !Number.isNaN(v)));
      const X = Float64Array.from(rows.flatMap((t) => [1, ...Array.from({ length: k }, (_, j) => x[t - 1 - j])])), y = Float64Array.from(rows, (t) => x[t]);
      expect(partial[k]).toBeCloseTo(leastSquares(X, y, rows.length, k + 1).beta[k], 8);
    }
  });
  it("the profile of lambda: the regression on a trend and a dummy a position", () => {
    const y = hourly(240).map((v, t) => (t === 17 ? NaN : v)), at = likelihood(y, "season", 24);
    const kept = [...y.keys()].filter((t) => t !== 17), n = kept.length, X = new Float64Array(n * 25);
    kept.forEach((t, i) => { X[i * 25] = 1; X[i * 25 + 1] = t / 240; if (t % 24 > 0) X[i * 25 + 1 + (t % 24)] = 1; });
    for (const lambda of [-0.5, 0, 0.7, 1]) {
      const z = Float64Array.from(kept, (t) => (lambda === 0 ? Math.log(y[t]) : (y[t] ** lambda - 1) / lambda)), logs = kept.reduce((s, t) => s + Math.log(y[t]), 0);
      expect(at(lambda)).toBeCloseTo((-n / 2) * Math.log(leastSquares(X, z, n, 25).rss / n) + (lambda - 1) * logs, 6);
    }
  });
  it("an outlier's products with the residuals, at every date at once", () => {
    const y = makeSeries({ name: "y", every: "month", start: "2010-01", values: Float64Array.from(seriesOf("airline")) });
    const model = fit({ series: y, ar: 1, ma: 1, season: { length: 12, ma: 1 } }), e = model.residuals.values, n = e.length;
    for (const type of ["additive", "levelShift", "temporaryChange", "innovational"] as OutlierType[]) {
      const x = patternOf(type, model, 0.7, n), products = patternProducts(type, model, 0.7, e);
      for (const i of [0, 5, 70, n - 2, n - 1]) {
        let sum = 0;
        for (let t = i; t < n; t++) sum += e[t] * x[t - i];
        expect(products[i]).toBeCloseTo(sum, 7);
      }
    }
  });
});
