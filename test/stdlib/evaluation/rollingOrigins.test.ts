import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import { mae, mase, rmse } from "../../../stdlib/evaluation/accuracy.ts";
import { rollingOrigins } from "../../../stdlib/evaluation/rollingOrigins.ts";
import { forecast } from "../../../stdlib/forecast/forecast.ts";
import { normals, seeded } from "../../../stdlib/forecast/random.ts";
import { rule } from "../../../stdlib/forecast/rules.ts";
import { makeSeries, type Series } from "../../../stdlib/series/series.ts";
import { applySteps, type Step } from "../../../stdlib/series/steps.ts";
import { referenceSeries } from "../forecast/reference.ts";

const airline = (change: (v: number, t: number) => number = (v) => v): Series => {
  const { times, values } = referenceSeries("airline");
  return makeSeries({ name: "passengers", every: "P1M", start: times[0], values: values.map(change) });
};
const logDifferenced: Step[] = [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }];
const seasonal = (series: Series) => fit({ series: applySteps(series, logDifferenced), ma: 1, season: { length: 12, ma: 1 } });

describe("rolling origins see nothing later", () => {
  it("changing later data changes no earlier forecast, to the bit", async () => {
    // With whole-series steps too: a trend and a season that were taken once over all data would show here.
    const models = (s: Series) => ({
      airline: seasonal(s), trend: fit({ series: applySteps(s, [{ step: "log" }, { step: "detrend", degree: 1 }, { step: "seasonallyAdjust", length: 12 }]), ar: 1 }),
      smooth: rule.smoothing(s, { trend: "additive", season: "multiplicative" }), drift: rule.drift(s), mix: rule.combine([rule.naive(s), rule.seasonalNaive(s)]),
    });
    const changed = 139, options = { origins: 6, horizon: 3, levels: [0.8] };
    const a = await rollingOrigins(models(airline()), options), b = await rollingOrigins(models(airline((v, t) => (t >= changed ? v * 1.7 : v))), options);
    let compared = 0;
    for (const f of a.forecasts) {
      if (f.origin >= airline().times[changed]) continue;
      const other = b.forecasts.find((x) => x.label === f.label && x.origin === f.origin)!;
      // Smoothing and ARMA searches start from the previous origin's estimates, never from the whole sample's.
      f.median.forEach((m, h) => expect(other.median[h], `${f.label} at ${f.origin}`).toBe(m));
      expect(other.bands[0].high).toEqual(f.bands[0].high);
      compared++;
    }
    // Origins 1960-04 to 1960-07 of five models.
    expect(compared).toBe(5 * 4);
  });
  it("is what a forecast from the cut data says", async () => {
    const s = airline(), found = await rollingOrigins({ m: seasonal(s) }, { origins: 3, horizon: 6, levels: [0.8] });
    const cutFit = fit({ series: applySteps(s, logDifferenced), ma: 1, season: { length: 12, ma: 1 }, window: { to: found.origins[2] } });
    const direct = forecast(cutFit, { horizon: 6, levels: [0.8] }), rolled = found.forecasts.filter((f) => f.label === "m")[2];
    direct.median.forEach((x, h) => expect(rolled.median[h] / x).toBeCloseTo(1, 5));
    expect(rolled.actual).toEqual(direct.heldOut!.values.slice(0, 6));
  });
  it("keeps the first origin's parameters where refit is false, and refits every so many", async () => {
    const s = airline(), m = seasonal(s), options = { origins: 6, horizon: 1, levels: [0.8] };
    const [every, held, third] = await Promise.all([true, false, 3].map((refit) => rollingOrigins({ m }, { ...options, refit })));
    expect(held.forecasts[0].median).toEqual(every.forecasts[0].median);
    expect(held.forecasts[5].median[0]).not.toBe(every.forecasts[5].median[0]);
    expect(third.forecasts[2].median[0]).toBeCloseTo(held.forecasts[2].median[0], 6);
    expect(third.forecasts[3].median[0]).toBeCloseTo(every.forecasts[3].median[0], 2);
  });
  it("a sliding sample keeps its length: the average rule at each origin by hand", async () => {
    const s = makeSeries({ name: "x", values: Array.from({ length: 30 }, (_, t) => t * t) });
    const found = await rollingOrigins({ average: rule.average(s) }, { origins: 4, horizon: 1, training: "sliding" });
    // 30 values, horizon 1, 4 origins: the first sees 26 values, the second the 26 from the second on.
    const by = (from: number) => Array.from({ length: 26 }, (_, i) => (from + i) ** 2).reduce((a, b) => a + b, 0) / 26;
    found.forecasts.forEach((f, k) => expect(f.median[0]).toBeCloseTo(by(k), 9));
  });
});

describe("scores", () => {
  it("are the accuracy measures of the forecasts shown, in data units", async () => {
    const s = airline(), found = await rollingOrigins({ m: seasonal(s), n: rule.seasonalNaive(s) }, { origins: 10, horizon: 4, levels: [0.8] });
    const mine = found.forecasts.filter((f) => f.label === "m"), at = (h: number, pick: (f: (typeof mine)[number]) => Float64Array) => mine.map((f) => pick(f)[h]);
    const row = found.scores.find((r) => r.label === "m" && r.horizon === 2)!;
    expect(row.mae).toBeCloseTo(mae(at(1, (f) => f.actual), at(1, (f) => f.median)), 10);
    expect(row.rmse).toBeCloseTo(rmse(at(1, (f) => f.actual), at(1, (f) => f.mean)), 10);
    const scaled = mine.map((f, k) => mase([f.actual[1]], [f.median[1]], s.values.slice(0, 144 - 4 - 10 + k + 1), 12));
    expect(row.mase).toBeCloseTo(scaled.reduce((a, b) => a + b, 0) / 10, 10);
    expect(row.coverage[0].share).toBeCloseTo(mine.filter((f) => f.actual[1] >= f.bands[0].low[1] && f.actual[1] <= f.bands[0].high[1]).length / 10, 12);
    expect(found.best.label).toBe("m");
    expect(found.best.fit?.theta[0]).toBeLessThan(0);
    expect(found.models[0].mase).toBe(found.scores.find((r) => r.label === "m" && r.horizon === "all")!.mase);
    expect(found.against.filter((r) => r.a === "m" && r.b === "n").map((r) => r.horizon)).toEqual([1, 2, 3, 4, "all"]);
  });
  it("says that a model does not beat naive when it does not, of a random walk", async () => {
    const normal = normals(seeded(2)), values = new Float64Array(160);
    for (let t = 1; t < values.length; t++) values[t] = values[t - 1] + normal();
    const s = makeSeries({ name: "walk", values });
    const found = await rollingOrigins({ mean: fit({ series: s, ar: 3 }), average: rule.average(s) }, { origins: 40, horizon: 3 });
    const worst = found.models.find((m) => m.label === "average")!;
    expect(worst.beatsNaive).toBe("no");
    expect(worst.sentence).toMatch(/^average does not beat naive: the naive rule forecast as well or better \(/);
    expect(found.naive.label).toContain("naive");
  });
  it("shows few origins without a p-value, with the reason", async () => {
    const s = airline(), found = await rollingOrigins({ m: seasonal(s), d: rule.drift(s) }, { origins: 3, horizon: 2 });
    expect(found.against.every((r) => Number.isNaN(r.p) && r.note?.includes("too few"))).toBe(true);
    expect(found.best.beatsNaive).not.toBe("yes");
    expect(found.confidenceSet.status).toBe("unavailable");
    expect(found.sentence).toContain("no test between them");
  });
  it("ties are ties", async () => {
    const s = airline(), found = await rollingOrigins({ a: rule.naive(s), b: rule.naive(s) }, { origins: 12, horizon: 1 });
    expect(found.models.map((m) => m.rank)).toEqual([1, 1]);
    expect(found.sentence).toContain("tie");
    expect(found.against[0].note).toContain("a tie");
  });
});

describe("work that is stopped, and models that fail", () => {
  it("keeps what is done, and reports progress by count", async () => {
    const s = airline(), seen: [number, number, string][] = [];
    let breaths = 0;
    const found = await rollingOrigins({ a: rule.drift(s), b: rule.average(s) }, { origins: 10, horizon: 1 }, {
      progress: (done, total, what) => { seen.push([done, total, what]); }, breathe: async () => { breaths++; }, stopped: () => breaths >= 15 });
    expect(seen[0]).toEqual([1, 40, "a"]);
    expect(found).toMatchObject({ complete: false, done: 15, total: 40 });
    // Two models and the two naive rules take their turns origin by origin: three whole origins are among 15 forecasts.
    expect(found.origins.length).toBe(3);
    expect(found.models.every((m) => m.n === 3)).toBe(true);
    expect(found.notes[0]).toContain("Stopped early: scored on the first 3 of 10 origins");
  });
  it("says so when it is stopped before one origin is whole", async () => {
    const s = airline();
    let forecasts = 0;
    await expect(rollingOrigins({ a: rule.drift(s), b: rule.average(s) }, { origins: 10, horizon: 1 }, { progress: () => { forecasts++; }, stopped: () => forecasts === 1 })).rejects.toThrow("stopped before all models had forecast from the first origin");
  });
  it("a model that cannot be estimated on a short stretch is listed with its reason, and the others are scored", async () => {
    const s = airline(), small = makeSeries({ name: "s", every: "P1M", start: s.times[0], values: s.values.slice(0, 30) });
    const found = await rollingOrigins({ drift: rule.drift(small), season: rule.smoothing(small, { season: "additive" }) }, { origins: 18, horizon: 1 });
    expect(found.failures.length).toBeGreaterThan(0);
    expect(found.failures[0].reason).toContain("needs at least");
    expect(found.best.label).toBe("drift");
  });
  it("refuses models of different series, and more origins than there is room for", async () => {
    const s = airline();
    await expect(rollingOrigins({ a: rule.naive(s), b: rule.naive(airline((v) => v + 1)) }, { origins: 2, horizon: 1 })).rejects.toThrow("not of one series");
    await expect(rollingOrigins({ a: rule.naive(s) }, { origins: 140, horizon: 12 })).rejects.toThrow("at most 127 origins");
  });
});

describe("regressors at rolling origins", () => {
  it("come with their observed later values, which is said", async () => {
    const s = airline(), price = makeSeries({ name: "price", every: "P1M", start: s.start, values: s.values.map((v, t) => Math.sin(t) + v / 1000) });
    const found = await rollingOrigins({ m: fit({ series: applySteps(s, logDifferenced), ma: 1, season: { ma: 1 }, regressors: { price } }) }, { origins: 9, horizon: 2 });
    expect(found.failures).toEqual([]);
    expect(found.notes.some((n) => n.includes("as they turned out"))).toBe(true);
  });
});
