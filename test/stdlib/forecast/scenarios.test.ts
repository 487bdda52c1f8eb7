import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import { regressionCovariance } from "../../../stdlib/arma/regressionCovariance.ts";
import { forecast, forecasting } from "../../../stdlib/forecast/forecast.ts";
import { pulse } from "../../../stdlib/forecast/interventions.ts";
import { normals, seeded } from "../../../stdlib/forecast/random.ts";
import { rule } from "../../../stdlib/forecast/rules.ts";
import { makeSeries, type Series } from "../../../stdlib/series/series.ts";
import { applySteps, type Step } from "../../../stdlib/series/steps.ts";

const monthly = (name: string, start: string, values: ArrayLike<number>): Series => makeSeries({ name, unit: "t", every: "P1M", start, values });
const normal = normals(seeded(4)), noise = (sd: number, n = 72): number[] => Array.from({ length: n }, () => sd * normal());
const price = monthly("price", "2018-01", noise(1).map((e, t) => 10 + Math.sin(t / 3) + e)), rain = monthly("rain", "2018-01", noise(2));
const sales = monthly("sales", "2018-01", noise(0.5).map((e, t) => 100 - 3 * price.values[t] + rain.values[t] + e));
const ahead = (name: string, value: number, n = 6): Series => monthly(name, "2024-01", new Float64Array(n).fill(value));

describe("scenarios", () => {
  const model = fit({ series: sales, ar: 1, regressors: { price, rain } });
  const options = { horizon: 6, levels: [0.9], regressors: { rain: ahead("rain", 0) }, scenarios: { cheap: { price: ahead("price", 9) }, dear: { price: ahead("price", 11) } }, totals: [{ from: "2024-01", to: "2024-06" }, { from: "2023-07", to: "2024-06" }] };
  it("each is the forecast with its own future; the forecast's own figures are the first's", () => {
    const found = forecast(model, options), alone = forecast(model, { ...options, scenarios: undefined, regressors: { ...options.regressors, price: ahead("price", 11) } });
    expect(Object.keys(found.scenarios)).toEqual(["cheap", "dear"]);
    expect(found.scenarios.dear.bands).toEqual(alone.bands);
    expect(found.scenarios.dear.totals).toEqual(alone.totals);
    expect(found.median).toBe(found.scenarios.cheap.median);
    expect(found.scenarios.cheap.difference).toBeNull();
  });
  it("without a log a difference is the coefficient times the step, with the coefficient's own standard error and no shock in it", () => {
    const { difference } = forecast(model, options).scenarios.dear, [band] = difference!.bands;
    expect(difference!.against).toBe("cheap");
    expect(difference!.median[3]).toBeCloseTo(2 * model.beta.price, 8);
    // Standard errors come from the observed information, the band from generalised least squares: alike up to order 1 / n.
    expect((band.high[3] - band.low[3]) / (2 * 1.6448536269514722 * 2 * model.se.beta.price)).toBeCloseTo(1, 1);
    expect(difference!.totals[0].median).toBeCloseTo(12 * model.beta.price, 8);
    // One coefficient moves all months: its errors add up in full, and months that were observed add nothing.
    expect(difference!.totals[0].bands[0].high - difference!.totals[0].bands[0].low).toBeCloseTo(6 * (band.high[3] - band.low[3]), 8);
    expect(difference!.totals[1].median).toBeCloseTo(difference!.totals[0].median, 10);
  });
  it("with differences the step counts where it is taken: a future that comes back makes a difference that goes", () => {
    const levels = monthly("sales", "2018-01", sales.values.map((v, t) => v + t)), walk = fit({ series: applySteps(levels, [{ step: "difference", lag: 1 }]), ma: 1, regressors: { price } });
    const back = monthly("price", "2024-01", [11, 11, 9, 9, 9, 9]);
    const { difference } = forecast(walk, { ...options, regressors: {}, scenarios: { flat: { price: ahead("price", 9) }, back: { price: back } } }).scenarios.back;
    expect(difference!.median[1]).toBeCloseTo(2 * walk.beta.price, 8);
    expect(difference!.median[4]).toBeCloseTo(0, 8);
  });
  it("after a log it acts in proportion, and agrees with simulation from the joint distribution within sampling error", () => {
    const logs = fit({ series: applySteps(sales, [{ step: "log" } as Step]), ar: 1, regressors: { price, rain } });
    const found = forecast(logs, { ...options, levels: [0.8] }), { cheap, dear } = found.scenarios, [band] = dear.difference!.bands;
    const effect = 2 * logs.beta.price, sd = 2 * Math.sqrt(regressionCovariance(logs, ["price"])![0]), draw = normals(seeded(99)), n = 20_000;
    // By hand: level of the first scenario, lognormal, times what the uncertain effect does to it.
    const made = Float64Array.from({ length: n }, () => Math.exp(Math.log(cheap.median[0]) + cheap.se[0] * draw()) * Math.expm1(effect + sd * draw())).sort();
    const spread = made[18_000] - made[2000];
    // Standard error of a 90% quantile of 4,000 and 20,000 draws: sqrt(0.09 / n) over a density of 0.175 in standard deviations.
    expect(Math.abs(band.high[0] - made[18_000]) / (spread / 2.563)).toBeLessThan(4 * Math.sqrt(0.09 / 4000 + 0.09 / n) / 0.175);
    expect(dear.difference!.mean[0]).toBeCloseTo(dear.mean[0] - cheap.mean[0], 10);
  });
  it("simulated: the difference is taken path by path, and is much surer than two forecasts by themselves", () => {
    const found = forecast(model, { ...options, bands: "simulated" }), { cheap, dear } = found.scenarios;
    const width = (b: { low: ArrayLike<number>; high: ArrayLike<number> }) => b.high[3] - b.low[3];
    expect(dear.difference!.median[3]).toBeCloseTo(2 * model.beta.price, 0);
    expect(width(dear.difference!.bands[0])).toBeLessThan(0.7 * Math.hypot(width(cheap.bands[0]), width(dear.bands[0])));
    expect(width(dear.difference!.bands[0]) / (2 * 1.645 * 2 * model.se.beta.price)).toBeGreaterThan(0.7);
  });
  it("simulated: the sets of parameters are estimated once for all scenarios", () => {
    const slices = (scenarios: unknown) => { let n = 0; const work = forecasting(model, { ...options, regressors: { rain: ahead("rain", 0), ...(scenarios ? {} : { price: ahead("price", 9) }) }, bands: "simulated", scenarios: scenarios as never }); while (!work.next().done) n++; return n; };
    expect(slices(options.scenarios)).toBe(slices(undefined));
  });
  it("the note says from which, and that an association is taken for an effect", () => {
    expect(forecast(model, options).notes.find((n) => n.code === "scenarios")?.text).toMatch(/Differences are from cheap.*is assumed, not shown/);
  });
});

it("coefficients of regressors alone are as uncertain together as least squares says: sigma2 times the inverse of X'X", () => {
  const model = fit({ series: sales, regressors: { price, rain } }), centred = [price, rain].map(({ values }) => values.map((v) => v - values.reduce((a, b) => a + b, 0) / values.length));
  const [a, b, c] = [[0, 0], [0, 1], [1, 1]].map(([i, j]) => centred[i].reduce((sum, v, t) => sum + v * centred[j][t], 0)), determinant = a * c - b * b;
  [c / determinant, -b / determinant, -b / determinant, a / determinant].forEach((v, at) => expect(regressionCovariance(model, ["price", "rain"])![at] / (model.sigma2 * v)).toBeCloseTo(1, 9));
  expect([...regressionCovariance(fit({ series: sales, regressors: { price, rain }, hold: { beta: { rain: 1 } } }), ["rain"])!]).toEqual([0]);
});

describe("scenarios refuse, in words", () => {
  const model = fit({ series: sales, ar: 1, regressors: { price, strike: pulse("2020-03") } }), cheap = { price: ahead("price", 9) };
  it.each([
    ["a future that is too short, naming the scenario", { cheap, dear: { price: ahead("price", 11, 3) } }, "In scenario dear: Regressor price ends 2024-03; the horizon needs 2024-06"],
    ["a name that is no regressor", { cheap, dear: { cost: ahead("cost", 1) } }, "In scenario dear: cost is no regressor"],
    ["an intervention", { cheap, dear: { ...cheap, strike: ahead("strike", 1) } }, "strike is an intervention, which extends by itself"],
    ["a series in place of an object", { cheap, dear: ahead("price", 11) }, "dear is not an object of series"],
    ["one alone", { cheap }, "give two or more to set side by side"],
  ])("%s", (_what, scenarios, words) => { expect(() => forecast(model, { horizon: 6, scenarios: scenarios as never })).toThrow(words); });
  it("a rule", () => { expect(() => forecast(rule.naive(sales), { horizon: 6, scenarios: { cheap, dear: cheap } })).toThrow("naive is a rule and has no regressors"); });
});
