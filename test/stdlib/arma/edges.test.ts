import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import { fitAt } from "../../../stdlib/arma/fitAt.ts";
import { filterWith } from "../../../stdlib/arma/filterWith.ts";
import { modelName } from "../../../stdlib/arma/modelName.ts";
import type { Fit, FitOptions } from "../../../stdlib/arma/model.ts";
import { predict } from "../../../stdlib/arma/predict.ts";
import { simulate } from "../../../stdlib/arma/simulate.ts";
import { harmonics, levelShift } from "../../../stdlib/forecast/interventions.ts";
import { slice } from "../../../stdlib/series/cut.ts";
import { readValues } from "./cases.ts";
import { makeSeries, type Series } from "../../../stdlib/series/series.ts";
import { applySteps } from "../../../stdlib/series/steps.ts";

const series = (values: ArrayLike<number>, every: string | null = null, start?: string): Series => makeSeries({ name: "flow", values, every, ...(start ? { start } : {}) });

/** A result whose every figure is finite or properly absent, or a refusal in a sentence. */
function answers(options: FitOptions): Fit | string {
  const began = performance.now();
  let result: Fit | string;
  try { result = fit(options); } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    result = error.message;
    expect(result).toMatch(/^fit: .{20,}/);
    expect(result).not.toMatch(/NaN|undefined|Infinity/);
  }
  expect(performance.now() - began).toBeLessThan(5000);
  if (typeof result !== "string") {
    for (const v of [...result.phi, ...result.theta, result.mean, result.constant, result.sigma2, result.logLikelihood, result.aic, result.bic]) expect(Number.isFinite(v)).toBe(true);
    const p = predict(result, 3);
    for (const v of [...p.mean, ...p.se]) expect(Number.isFinite(v)).toBe(true);
    for (const note of result.notes) expect(note.text).not.toMatch(/NaN|undefined/);
  }
  return result;
}

describe("pathological series give a result or a clear refusal", () => {
  const models: Partial<FitOptions>[] = [{ ar: 1 }, { ma: 1 }, { ar: 2, ma: 1 }, { ar: 1, mean: false }, {}];
  const noisy = simulate({ phi: [0.6] }, 60, 4).values;
  const outlier = Float64Array.from(noisy);
  outlier[30] = 1e12;
  const few = new Float64Array(60).fill(NaN);
  few[3] = 1; few[30] = 2; few[50] = 4;
  const cases: [string, Float64Array | number[]][] = [
    ["constant", new Float64Array(40).fill(7)], ["two values", [1, 2]], ["one value", [1]], ["none", []], ["an outlier of 1e12", outlier],
    ["alternating signs", Float64Array.from({ length: 40 }, (_, t) => t % 2 === 0 ? 1 : -1)], ["all missing", new Float64Array(30).fill(NaN)],
    ["all missing but three", few], ["a perfect line", Float64Array.from({ length: 50 }, (_, t) => 3 + 2 * t)],
    ["integers of 1e15", Float64Array.from({ length: 60 }, (_, t) => 1e15 + Math.round(noisy[t] * 10))], ["n = p + q + 1", [1, 3, 2, 5]],
    ["tiny numbers", noisy.map(v => v * 1e-150)], ["huge numbers", noisy.map(v => v * 1e120)], ["a step", Float64Array.from({ length: 60 }, (_, t) => t < 30 ? 0 : 1)],
    ["an infinite value", Float64Array.from(noisy, (v, t) => t === 5 ? Infinity : v)],
  ];
  for (const [name, values] of cases) {
    for (const model of models) {
      it(`${name}: ${JSON.stringify(model)}`, () => { answers({ series: series(values), ...model }); });
      if (values.length > 2) it(`${name}, differenced: ${JSON.stringify(model)}`, () => { answers({ series: applySteps(series(values), [{ step: "difference", lag: 1 }]), ...model }); });
    }
  }

  it("says in words that a constant cannot be modelled", () => {
    expect(answers({ series: series(new Float64Array(40).fill(7)), ar: 1 })).toBe("fit: flow is 7 throughout: a constant series has no variation to model");
    expect(answers({ series: applySteps(series(Float64Array.from({ length: 50 }, (_, t) => 3 + 2 * t)), [{ step: "difference", lag: 1 }]), ar: 1 })).toMatch(/after differencing, flow is 2 throughout/);
  });

  it("fits whole numbers of 1e15 by what varies in them, also beside a trend", () => {
    const shift = Float64Array.from(noisy, v => Math.round(1000 * v)), high = shift.map(v => 1e15 + v);
    const t = series(Float64Array.from({ length: 60 }, (_, i) => i));
    for (const regressors of [{}, { t }] as FitOptions["regressors"][]) {
      const low = fit({ series: series(shift), ar: 1, regressors }), found = fit({ series: series(high), ar: 1, regressors });
      // The values are exact; only their mean of 1e15 rounds, to an eighth.
      expect(Math.abs(found.phi[0] - low.phi[0])).toBeLessThan(1e-3);
      expect(Math.abs(found.sigma2 / low.sigma2 - 1)).toBeLessThan(1e-3);
    }
  });

  it("refuses values whose squares no number holds, and says how to bring them to another unit", () => {
    expect(answers({ series: series(noisy.map(v => v * 1e300)), ar: 1 })).toMatch(/^fit: the values of flow are of a size .* such as scale\(1e-200/);
    expect(answers({ series: series(noisy.map(v => v * 1e-200)), ar: 1 })).toMatch(/such as scale\(1e200/);
  });

  it("says so where another method ends outside the region of stationarity, and gives no likelihood there", () => {
    const doubling = series(Float64Array.from({ length: 40 }, (_, t) => 2 ** t));
    for (const method of ["conditional", "leastSquares"] as const) {
      const found = fit({ series: doubling, ar: 1, method });
      expect(found.phi[0]).toBeCloseTo(2, 6);
      expect(found.logLikelihood).toBeNaN();
      expect(found.notes.find(n => n.code === "notStationary")?.text).toMatch(/no exact likelihood .* Difference the series/);
    }
    const signs = series(Float64Array.from({ length: 40 }, (_, t) => t % 2 === 0 ? 1 : -1));
    for (const method of ["burg", "yuleWalker"] as const) expect(fit({ series: signs, ar: 3, method }).sigma2).toBeGreaterThanOrEqual(0);
  });

  it("flags what other methods than the exact one find, too", () => {
    const walk = simulate({ phi: [0.9995] }, 2000, 3);
    for (const method of ["conditional", "burg", "leastSquares"] as const) expect(fit({ series: walk, ar: 1, method }).notes.map(n => n.code)).toContain("nearUnitRoot");
  });

  it("says how many observations are needed", () => {
    expect(answers({ series: series([1, 3, 2, 5]), ar: 2, ma: 1 })).toMatch(/5 parameters .* 4 observations/);
  });

  it("flags a root at the edge, and gives no standard errors there", () => {
    // White noise that was differenced once too often (its maximum is on the circle, as the reference set records).
    const found = fit({ series: series(readValues("sim_overdiff")), ma: 1 });
    expect(found.notes.map(n => n.code)).toContain("overDifferenced");
    expect(found.notes.map(n => n.code)).toContain("noStandardErrors");
    expect(found.se.theta[0]).toBeNaN();
    expect(found.theta[0]).toBeCloseTo(-1, 4);
  });

  it("keeps the standard errors that stand when a moving-average root is on the circle", () => {
    // A regression with AR(1) errors, differenced once too often: the intervals of what is not at the edge hold in 95% of the samples.
    let fits = 0, beta = 0, phi = 0;
    for (let seed = 1; seed <= 400; seed++) {
      const x = simulate({ phi: [0.8] }, 80, 10 * seed).values, e = simulate({ phi: [0.5] }, 80, 10 * seed + 1).values;
      const w = applySteps(series(e.map((v, t) => v + 2 * x[t])), [{ step: "difference", lag: 1 }]);
      const found = fit({ series: w, ar: 1, ma: 1, regressors: { x: series(x) } });
      if (!found.notes.some(n => n.code === "overDifferenced")) continue;
      fits++;
      expect(found.se.theta[0]).toBeNaN();
      expect(found.notes.find(n => n.code === "noStandardErrors")?.text).toMatch(/^No standard error is available for MA lag 1: .* take that root as known\.$/);
      if (Math.abs(found.beta.x - 2) < 1.96 * found.se.beta.x) beta++;
      if (Math.abs(found.phi[0] - 0.5) < 1.96 * found.se.phi[0]) phi++;
    }
    expect(fits).toBeGreaterThan(200);
    // 95% less three binomial standard errors, and less what 80 values cost a normal interval (two in a hundred).
    const least = 0.95 - 0.02 - 3 * Math.sqrt(0.95 * 0.05 / fits);
    expect(beta / fits).toBeGreaterThan(least);
    expect(phi / fits).toBeGreaterThan(least);
  });

  it("gives no standard error at all on the edge of stationarity", () => {
    // A pure swing of twelve steps: an AR(2) with both roots on the circle repeats it for ever.
    const found = fit({ series: series(Float64Array.from({ length: 240 }, (_, t) => Math.sin(2 * Math.PI * t / 12))), ar: 2, mean: false });
    expect(found.notes.find(n => n.code === "noStandardErrors")?.text).toMatch(/autoregressive root lies on the unit circle/);
    expect(found.se.phi[0]).toBeNaN();
  });

  it("says where the likelihood rises towards a fixed pattern and has no proper maximum", () => {
    // White noise about two levels that alternate, in part: both sides end at a common root of -1.
    const swing = series(simulate({}, 64, 8).values.map((v, t) => v + (t % 2 === 0 ? 0.45 : -0.45)));
    const found = fit({ series: swing, ar: 1, ma: 1 });
    expect(found.phi[0]).toBeLessThan(-0.99);
    expect(found.notes.find(n => n.code === "notConverged")?.text).toMatch(/two sides share a root on the unit circle\. That is a fixed pattern/);
  });

  it("flags factors that nearly cancel", () => {
    const found = fit({ series: simulate({}, 300, 2), ar: 1, ma: 1 });
    expect(found.notes.map(n => n.code)).toContain("nearCancelling");
  });

  it("leaves a collinear regressor out and says so", () => {
    const y = simulate({ phi: [0.5] }, 80, 3), x = simulate({ phi: [0.2] }, 80, 4);
    const found = fit({ series: series(y.values), ar: 1, regressors: { a: series(x.values), b: series(x.values.map(v => 2 * v + 1)) } });
    expect(found.notes.map(n => n.code)).toContain("collinear");
    expect(Math.min(Math.abs(found.beta.a), Math.abs(found.beta.b))).toBe(0);
  });

  it("names a regressor that the others together nearly replace, and by how much", () => {
    const y = simulate({ phi: [0.5] }, 200, 3), a = simulate({}, 200, 4).values, b = simulate({}, 200, 5).values, noise = simulate({}, 200, 6).values;
    const c = a.map((v, t) => v + b[t] + 0.1 * noise[t]);
    const found = fit({ series: series(y.values), ar: 1, regressors: { a: series(a), b: series(b), c: series(c) } });
    const text = found.notes.find(n => n.code === "collinear")?.text ?? "";
    // By hand: given a and b, c has a variance of 0.01 left of 2.01, so its coefficient's variance is about 201 times as large.
    const times = Number(/variance of c's coefficient is (\d+) times/.exec(text)?.[1]);
    expect(times).toBeGreaterThan(150);
    expect(times).toBeLessThan(280);
    expect(text).toMatch(/^The regressors c, [ab], [ab] can hardly be told from the rest/);
    // No pair of them is correlated as much as that.
    expect(found.notes.map(n => n.code)).not.toContain("correlated");
    expect(fit({ series: series(y.values), ar: 1, regressors: { a: series(a), b: series(b) } }).notes.map(n => n.code)).not.toContain("collinear");
  });

  it("says why a regressor is left out: it does not vary in the sample, or takes the place of the drift", () => {
    const y = simulate({ phi: [0.5] }, 80, 3);
    const text = (options: Partial<FitOptions>) => fit({ series: series(y.values, "P1M", "2015-01"), ar: 1, ...options }).notes.find(n => n.code === "collinear")?.text;
    expect(text({ regressors: { strike: levelShift("2025-01") } })).toBe("The regressor strike is 0 throughout the sample, so it was left out (coefficient 0, no standard error). Remove it, or take a sample in which it varies.");
    expect(text({ regressors: { always: levelShift("2010-01") } })).toMatch(/^The regressor always is the same throughout the sample, as the mean is, so/);
  });

  it("leaves out regressors that the differences take away, not fitting the dust of rounding", () => {
    const w = applySteps(series(simulate({ phi: [0.5], mean: 100 }, 120, 3).values, "P1M", "2010-01"), [{ step: "difference", lag: 12 }]);
    const found = fit({ series: w, ma: 1, regressors: { swing: harmonics(12, 3) } });
    expect(Object.values(found.beta)).toEqual([0, 0, 0, 0, 0, 0]);
    expect(found.notes.filter(n => n.code === "collinear").map(n => n.text)).toEqual([expect.stringMatching(/^The regressors swing\.\w+, .* and swing\.\w+ are 0 throughout the sample after differencing, so they were left out/)]);
    expect(found.k).toBe(2);
  });

  it("names lag coefficients that move together", () => {
    const found = fit({ series: series(simulate({ phi: [0.3] }, 150, 9).values), ar: 2, ma: 1, mean: false });
    expect(found.notes.find(n => n.code === "correlated")?.text).toMatch(/^The estimates of AR lag 1 and MA lag 1 are correlated −0\.9\d/);
  });

  it("names the regressor and the time where one is missing", () => {
    const y = simulate({ phi: [0.5] }, 30, 3), x = Float64Array.from(y.values);
    x[12] = NaN;
    expect(() => fit({ series: series(y.values, "P1M", "2020-01"), ar: 1, regressors: { price: series(x, "P1M", "2020-01") } })).toThrow(/price has no value at 2021-01/);
  });
});

describe("laws of the likelihood", () => {
  const base = simulate({ phi: [0.7], theta: [0.4], mean: 3 }, 150, 11);
  const found = fit({ series: series(base.values), ar: 1, ma: 1 });

  it("a shift moves the mean and nothing else", () => {
    const moved = fit({ series: series(base.values.map(v => v + 1000)), ar: 1, ma: 1 });
    expect(Math.abs(moved.mean - found.mean - 1000)).toBeLessThan(1e-5);
    expect(Math.abs(moved.logLikelihood - found.logLikelihood)).toBeLessThan(1e-7);
    expect(Math.abs(moved.phi[0] - found.phi[0])).toBeLessThan(1e-5);
  });

  it("a change of unit adds n log of the factor", () => {
    const scaled = fit({ series: series(base.values.map(v => v * 1e6)), ar: 1, ma: 1 });
    expect(Math.abs(scaled.logLikelihood - found.logLikelihood + 150 * Math.log(1e6))).toBeLessThan(1e-7);
    expect(Math.abs(scaled.sigma2 / found.sigma2 / 1e12 - 1)).toBeLessThan(1e-6);
    expect(Math.abs(scaled.se.phi[0] / found.se.phi[0] - 1)).toBeLessThan(1e-5);
  });

  it("time reversal of a Gaussian process changes nothing", () => {
    const back = fit({ series: series(Float64Array.from(base.values).reverse()), ar: 1, ma: 1 });
    expect(Math.abs(back.logLikelihood - found.logLikelihood)).toBeLessThan(1e-8);
    expect(Math.abs(back.theta[0] - found.theta[0])).toBeLessThan(1e-4);
  });

  it("a regressor's unit changes its coefficient in proportion, and nothing else", () => {
    const x = simulate({ phi: [0.9] }, 150, 12).values;
    const one = fit({ series: series(base.values), ar: 1, regressors: { x: series(x) } });
    const other = fit({ series: series(base.values), ar: 1, regressors: { x: series(x.map(v => 1e-4 * v)) } });
    expect(Math.abs(other.beta.x / one.beta.x / 1e4 - 1)).toBeLessThan(1e-6);
    expect(Math.abs(other.se.beta.x / one.se.beta.x / 1e4 - 1)).toBeLessThan(1e-5);
    expect(Math.abs(other.logLikelihood - one.logLikelihood)).toBeLessThan(1e-8);
  });

  it("one gap costs one observation, in levels too", () => {
    const values = Float64Array.from(base.values);
    values[40] = NaN;
    const gap = fit({ series: applySteps(series(values), [{ step: "difference", lag: 1 }]), ma: 1 });
    expect(gap.n).toBe(148);
  });

  it("many gaps (the filter) and few gaps (pulses) are the same likelihood", () => {
    const long = simulate({ phi: [0.7], theta: [0.4] }, 400, 13).values;
    const gappy = long.map((v, t) => t % 9 === 4 ? NaN : v);
    const hold = { phi: [0.6], theta: [0.3], mean: 0.1, sigma2: 1.2 };
    const whole = fit({ series: series(gappy), ar: 1, ma: 1, hold });
    // Two halves of the product rule: the filter over all gaps against the dense density of the observed values.
    expect(Math.abs(whole.logLikelihood - denseLogLikelihood(gappy, 0.6, 0.3, 0.1, 1.2))).toBeLessThan(1e-8);
    const estimated = fit({ series: series(gappy), ar: 1, ma: 1 });
    expect(estimated.converged).toBe(true);
    expect(Number.isFinite(estimated.se.phi[0])).toBe(true);
  });

  it("gives no robust standard error for a regressor that acts in a few periods: it fits their residuals away", () => {
    const monthly = series(base.values, "P1M", "2012-01"), at = levelShift("2018-01");
    const shift = fit({ series: monthly, ar: 1, regressors: { shift: at } });
    expect(Number.isFinite(shift.seRobust.beta.shift)).toBe(true);
    // The same shift after a difference is a single pulse.
    const differenced = fit({ series: applySteps(monthly, [{ step: "difference", lag: 1 }]), ma: 1, regressors: { shift: at } });
    expect(differenced.seRobust.beta.shift).toBeNaN();
    expect(Number.isFinite(differenced.se.beta.shift)).toBe(true);
  });

  it("robust and usual standard errors agree for a correct model and many values", () => {
    const many = fit({ series: simulate({ phi: [0.5], theta: [0.3] }, 20_000, 5), ar: 1, ma: 1 });
    expect(Math.abs(many.seRobust.phi[0] / many.se.phi[0] - 1)).toBeLessThan(0.05);
    expect(Math.abs(many.phi[0] - 0.5)).toBeLessThan(4 * many.se.phi[0]);
  });
});

/** Gaussian density of the observed values of an ARMA(1,1), by the innovations of the dense covariance matrix. */
function denseLogLikelihood(y: Float64Array, phi: number, theta: number, mean: number, sigma2: number): number {
  const g0 = (1 + 2 * phi * theta + theta * theta) / (1 - phi * phi), g1 = phi * g0 + theta;
  const times = [...y.keys()].filter(t => !Number.isNaN(y[t])), n = times.length;
  const gamma = (k: number) => sigma2 * (k === 0 ? g0 : g1 * phi ** (k - 1));
  const l = new Float64Array(n * n), z = new Float64Array(n);
  let value = -0.5 * n * Math.log(2 * Math.PI);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = gamma(times[i] - times[j]);
      for (let k = 0; k < j; k++) sum -= l[i * n + k] * l[j * n + k];
      l[i * n + j] = i === j ? Math.sqrt(sum) : sum / l[j * n + j];
    }
    let sum = y[times[i]] - mean;
    for (let k = 0; k < i; k++) sum -= l[i * n + k] * z[k];
    z[i] = sum / l[i * n + i];
    value -= Math.log(l[i * n + i]) + 0.5 * z[i] ** 2;
  }
  return value;
}

describe("the request", () => {
  const monthly = series(simulate({ phi: [0.5], mean: 10 }, 120, 6).values, "P1M", "2015-01");

  it("takes its season length from the spacing", () => {
    const found = fit({ series: monthly, season: { ar: 1 } });
    expect(found.seasonLength).toBe(12);
    expect(modelName({ series: monthly, ar: 2, season: { ma: 1 } })).toBe("(2,0,0)(0,0,1)12");
  });

  it("names subset lags", () => { expect(modelName({ series: monthly, ar: [1, 12] })).toBe("([1 12],0,0)"); });

  it("cuts by window and counts later data as held out", () => {
    const found = fit({ series: monthly, ar: 1, window: { to: "2020-12" } });
    expect(found.n).toBe(72);
    expect(found.series.n).toBe(72);
  });

  it("gives the mean and the equation's constant, named as such", () => {
    const found = fit({ series: monthly, ar: 1 });
    expect(found.constant).toBeCloseTo(found.mean * (1 - found.phi[0]), 12);
  });

  it("holds coefficients and estimates the rest", () => {
    const found = fit({ series: monthly, ar: 2, hold: { phi: [0.4] } });
    expect(found.phi[0]).toBe(0.4);
    expect(found.se.phi[0]).toBeNaN();
    expect(Number.isFinite(found.se.phi[1])).toBe(true);
    expect(found.k).toBe(3);
  });

  it("refuses a held process that is not stationary, saying so", () => {
    expect(() => fit({ series: monthly, ar: 1, hold: { phi: [1.2] } })).toThrow(/not stationary/);
  });

  it("refuses a hold for a lag that the model does not have", () => {
    expect(() => fit({ series: monthly, ar: 1, hold: { phi: [0.4, 0.2] } })).toThrow(/no such lag/);
  });

  it("differences interventions with the series", () => {
    const levels = series(Float64Array.from(monthly.values, (v, t) => v + (t >= 60 ? 8 : 0)), "P1M", "2015-01");
    const w = applySteps(levels, [{ step: "difference", lag: 1 }]);
    const found = fit({ series: w, ma: 1, regressors: { shift: levelShift("2020-01") } });
    expect(Math.abs(found.beta.shift - 8)).toBeLessThan(4 * found.se.beta.shift);
    const p = predict(found, 6);
    expect(p.mean.every(Number.isFinite)).toBe(true);
  });

  it("refits near its own estimates, and filters with parameters held", () => {
    const found = fit({ series: slice(monthly, 0, 100), ar: 1, ma: 1 });
    const again = fitAt(found, slice(monthly, 0, 110));
    const fresh = fit({ series: slice(monthly, 0, 110), ar: 1, ma: 1 });
    expect(Math.abs(again.logLikelihood - fresh.logLikelihood)).toBeLessThan(1e-6);
    const same = filterWith(found, slice(monthly, 0, 110));
    expect([...same.phi]).toEqual([...found.phi]);
    expect(same.sigma2).toBe(found.sigma2);
    expect(same.n).toBe(110);
    expect(predict(same, 1).se[0]).toBeCloseTo(Math.sqrt(found.sigma2), 6);
  });

  it("fits a week of hours: season 168", () => {
    const hours = series(simulate({ theta: [0.3], seasonalPhi: [0.6], seasonLength: 168 }, 700, 8).values, "PT1H", "2024-01-01T00:00Z");
    const found = fit({ series: hours, ma: 1, season: { length: 168, ar: 1 } });
    expect(found.converged).toBe(true);
    expect(Math.abs(found.seasonalPhi[0] - 0.6)).toBeLessThan(4 * found.se.seasonalPhi[0]);
  });
});

describe("many gaps", () => {
  it("robust standard errors are there too, near the usual ones", () => {
    const long = simulate({ phi: [0.7], theta: [0.4], mean: 2 }, 3000, 13).values;
    const found = fit({ series: series(long.map((v, t) => t % 11 === 4 ? NaN : v)), ar: 1, ma: 1 });
    expect(found.notes.map(n => n.code)).toContain("gaps");
    expect(Math.abs(found.seRobust.mean / found.se.mean - 1)).toBeLessThan(0.15);
    expect(Math.abs(found.seRobust.phi[0] / found.se.phi[0] - 1)).toBeLessThan(0.25);
  });
});
