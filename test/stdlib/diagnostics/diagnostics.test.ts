import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import { betaInc } from "../../../stdlib/distributions/special.ts";
import { diagnostics } from "../../../stdlib/diagnostics/diagnostics.ts";
import { jarqueBera } from "../../../stdlib/diagnostics/jarqueBera.ts";
import { outliers } from "../../../stdlib/diagnostics/outliers.ts";
import { ljungBox } from "../../../stdlib/diagnostics/portmanteau.ts";
import { betaQuantile, quantiles } from "../../../stdlib/diagnostics/qq.ts";
import { freeArmaCoefficients } from "../../../stdlib/diagnostics/subject.ts";
import { normals, seeded } from "../../../stdlib/forecast/random.ts";
import { makeSeries, type Series } from "../../../stdlib/series/series.ts";
import { applySteps } from "../../../stdlib/series/steps.ts";
import { agrees, casesOf, seriesOf, type Case } from "../referenceCases.ts";

const passengers = makeSeries({ name: "passengers", every: "P1M", start: "1949-01", values: seriesOf("airline") });
const steady = applySteps(passengers, [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]);
const airline = fit({ series: steady, ma: 1, season: { ma: 1 }, label: "airline" });

/** A month-stamped AR(1) with given additions. */
function invented(n: number, seed: number, add: (t: number) => number): Series {
  const draw = normals(seeded(seed));
  let u = 0;
  return makeSeries({ name: "x", every: "P1M", start: "2000-01", values: Float64Array.from({ length: n }, (_, t) => { u = 0.5 * u + draw(); return 20 + u + add(t); }) });
}

describe("diagnostics of a fit", () => {
  it("takes free ARMA coefficients off the degrees of freedom, not the mean, not held ones", () => {
    expect(freeArmaCoefficients(airline)).toBe(2);
    expect(ljungBox(airline, 24)).toMatchObject({ df: 22, lags: 24 });
    const x = invented(120, 3, () => 0);
    expect(ljungBox(fit({ series: x, ar: [1, 3], hold: { phi: ["free", 0, 0.1] } }), 10).df).toBe(9);
    expect(ljungBox(fit({ series: x, ar: 3 }), 2)).toMatchObject({ status: "unavailable", df: null });
    expect(ljungBox(fit({ series: x, ar: 3 }), 3).note).toBe("none left: 3 lags and 3 estimated coefficients leave no degrees of freedom; take a lag above 3");
  });
  it("tests the residuals of a fit held at a case's parameters as the reference does", () => {
    const c = casesOf("diagnostics", "jarqueBera").find((d: Case) => d.id === "jarqueBera-airline-1") as Case;
    const { params } = c.inputs as unknown as { params: { ma: number[]; sma: number[]; sigma2: number } };
    const held = fit({ series: steady, ma: 1, season: { ma: 1 }, hold: { theta: params.ma, seasonalTheta: params.sma, sigma2: params.sigma2 } });
    agrees(c, "statistic", jarqueBera(held).statistic, c.expected.statistic);
  });
  it("passes the airline model, and does not claim it is right", () => {
    const d = diagnostics({ model: airline, lags: 24 });
    expect(d.ljungBox.p).toBeGreaterThan(0.2);
    expect(d.sentence).toContain("no autocorrelation over 24 lags beyond chance (Ljung-Box p = ");
    expect(d.sentence).toContain("that does not show the model to be right");
    expect(d.portmanteau.ljungBox.slice(0, 3).map((r) => r.df)).toEqual([null, null, 1]);
    expect(d.portmanteau.monti).toHaveLength(d.acf.length - 1);
    expect(d.standardised.values[5]).toBeCloseTo(airline.residuals.values[5] / Math.sqrt(airline.sigma2), 12);
    expect(d.large.every((l) => Math.abs(l.value) > 3)).toBe(true);
    expect(d.durbinWatson).toBeCloseTo(1.96, 1);
    expect(d.notes[0]).toContain("lag less 2 estimated ARMA coefficients");
  });
  it("finds what an order that is too small leaves behind", () => {
    const d = diagnostics({ model: fit({ series: makeSeries({ name: "level", values: seriesOf("lakehuron") }), ma: 1 }) });
    expect(d.verdict).toBe("autocorrelated");
    expect(d.sentence).toContain("the model leaves something to predict");
  });
  it("of a series too short to say anything says so", () => {
    const d = diagnostics({ model: fit({ series: makeSeries({ name: "x", values: [1, 3, 2, 4, 3, 5] }), ar: 1 }) });
    expect(["unavailable", "passes", "other signs", "autocorrelated"]).toContain(d.verdict);
    expect(d.outliers.status).toBe("unavailable");
    expect(d.archLM.status).toBe("unavailable");
    expect(() => diagnostics({ model: airline, lags: 500 })).toThrow("from 1 to 130");
    expect(() => diagnostics({ model: airline, level: 95 })).toThrow("level is 95");
  });
});

describe("the outlier search", () => {
  it.each([
    ["additive", (t: number) => (t === 70 ? 8 : 0), 'pulse("2005-11")', 8],
    ["levelShift", (t: number) => (t >= 70 ? 6 : 0), 'levelShift("2005-11")', 6],
    ["temporaryChange", (t: number) => (t >= 70 ? 9 * 0.7 ** (t - 70) : 0), 'temporaryChange("2005-11", 0.7)', 9],
  ] as const)("finds one planted %s with its date and size, and names the regressor", (type, add, regressor, size) => {
    const model = fit({ series: invented(150, 11, add), ar: 1 });
    const { found, sentence } = outliers(model);
    const largest = found.reduce((a, b) => (Math.abs(b.t) > Math.abs(a.t) ? b : a));
    expect(largest).toMatchObject({ type, time: "2005-11", regressor });
    expect(Math.abs(largest.size - size)).toBeLessThan(2.5); // about two standard errors of one period's effect
    expect(sentence).toContain(regressor);
  });
  it("works through differences: a level shift in the levels of a differenced series", () => {
    const x = applySteps(invented(150, 5, (t) => (t >= 90 ? 12 : 0)), [{ step: "difference", lag: 1 }]);
    const { found } = outliers(fit({ series: x, ar: 1, ma: 1 }));
    expect(found.map((o) => o.regressor)).toContain('levelShift("2007-07")');
  });
  it("finds little in clean series: about one in fifteen has a false find", () => {
    let finds = 0;
    for (let seed = 100; seed < 140; seed++) finds += outliers(fit({ series: invented(100, seed, () => 0), ar: 1 })).found.length > 0 ? 1 : 0;
    // 2.7 of 40 are expected (test/bench/identify.ts); 9 or more have a probability below 0.002.
    expect(finds).toBeLessThan(9);
  });
});

describe("the quantile band", () => {
  it("keeps a whole normal sample inside 95 times in 100", () => {
    for (const n of [15, 60, 400]) {
      const draw = normals(seeded(2));
      let inside = 0;
      const reps = 200;
      for (let i = 0; i < reps; i++) inside += quantiles(Float64Array.from({ length: n }, draw)).outside === 0 ? 1 : 0;
      // Three standard errors of a simulated share are 0.046.
      expect(Math.abs(inside / reps - 0.95), `n = ${n}: ${inside / reps}`).toBeLessThan(0.046);
    }
  });
  it("rests on beta quantiles that undo the beta distribution", () => {
    for (const [p, a, b] of [[0.01, 2, 9], [0.001, 50, 51], [0.005, 400, 3], [0.02, 1, 9], [0.02, 9, 1], [1e-6, 3, 3000]]) expect(betaInc(betaQuantile(p, a, b), a, b) / p).toBeCloseTo(1, 8);
  });
  it("widens with the level, mirrors, and shows a heavy tail", () => {
    const draw = normals(seeded(4)), x = Float64Array.from({ length: 200 }, () => draw() / Math.abs(draw()));
    expect(quantiles(x).outside).toBeGreaterThan(3);
    const a = quantiles(x, 0.9), b = quantiles(x, 0.99), last = a.low.length - 1;
    expect(b.low[3]).toBeLessThan(a.low[3]);
    expect(a.high[last - 3]).toBeCloseTo(-a.low[3], 8);
    expect(quantiles(Float64Array.of(1, 1, 1, 1, 1, 1)).sample).toHaveLength(0);
  });
});
