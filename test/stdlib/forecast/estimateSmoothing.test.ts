import { describe, expect, it } from "vitest";
import { estimateSmoothing } from "../../../stdlib/forecast/smoothing/estimateSmoothing.ts";
import { bestStates, curvatureOfStates } from "../../../stdlib/forecast/smoothing/bestStates.ts";
import { innovationsFilter, type SmoothingForm, type SmoothingState } from "../../../stdlib/forecast/smoothing/innovations.ts";
import { Likelihood } from "../../../stdlib/forecast/smoothing/likelihood.ts";
import { leastSquares } from "../../../stdlib/linear/leastSquares.ts";
import { normals, seeded } from "../../../stdlib/forecast/random.ts";
import { referenceSeries } from "./reference.ts";

const kinds = ["additive", "multiplicative"] as const, season = 4;
const everyForm: SmoothingForm[] = kinds.flatMap((error) => (["none", ...kinds] as const).flatMap((trend) => (["none", ...kinds] as const)
  .map((seasons) => ({ error, trend, season: seasons, length: seasons === "none" ? 1 : season }))));
const named = everyForm.map((form) => [`${form.error} error, trend ${form.trend}, season ${form.season}`, form] as const);

/** Sixty values about 100 with a season of four, two of them missing. */
const y = (() => {
  const normal = normals(seeded(5)), values = Float64Array.from({ length: 60 }, (_, t) => 100 + 0.2 * t + [4, -1, -5, 2][t % season] + 2 * normal());
  values[17] = values[40] = NaN;
  return values;
})();

const startOf = (form: SmoothingForm): SmoothingState => ({
  alpha: 0.3, beta: form.trend === "none" ? 0 : 0.05, gamma: form.season === "none" ? 0 : 0.2, phi: form.trend === "none" ? 1 : 0.93, level: 99,
  trend: form.trend === "none" ? 0 : form.trend === "additive" ? 0.4 : 1.01,
  seasonal: Float64Array.from(form.season === "none" ? [] : form.season === "additive" ? [3, 0, -4, 1] : [1.03, 1, 0.96, 1.01]),
});

describe("the likelihood of a smoothing model", () => {
  it.each(named)("is the filter's: %s", (_, form) => {
    expect(new Likelihood(y, form).value(startOf(form))).toBeCloseTo(-2 * innovationsFilter(y, form, startOf(form)).logLikelihood, 8);
  });
  it.each(named)("has the slope that differences give: %s", (_, form) => {
    const likelihood = new Likelihood(y, form), start = startOf(form);
    likelihood.value(start);
    const slope = likelihood.slope(), moved = (by: (d: number) => SmoothingState): number => (likelihood.value(by(1e-6)) - likelihood.value(by(-1e-6))) / 2e-6;
    const names = ["alpha", "level", ...(form.trend === "none" ? [] : ["beta", "phi", "trend"]), ...(form.season === "none" ? [] : ["gamma"])] as ("alpha" | "beta" | "gamma" | "phi" | "level" | "trend")[];
    // Central differences of 1e-6 of values near 300 keep about seven digits of 1e3.
    const close = (found: number, expected: number): void => expect(Math.abs(found - expected)).toBeLessThan(1e-5 * Math.max(1, Math.abs(expected)));
    for (const name of names) close(slope[name], moved((d) => ({ ...start, [name]: start[name] + d })));
    start.seasonal.forEach((_s, j) => close(slope.seasonal[j], moved((d) => ({ ...start, seasonal: start.seasonal.map((s, i) => (i === j ? s + d : s)) }))));
  });
});

describe("the best starting states of an additive model", () => {
  const form: SmoothingForm = { error: "additive", trend: "additive", season: "additive", length: season }, weights = { alpha: 0.3, beta: 0.05, gamma: 0.2, phi: 0.93 };
  /** How each error falls when one state rises by 1, and the errors from states of 0: what the filter says. */
  const errors = (level: number, trend: number, seasonal: number[]) => innovationsFilter(y, form, { ...weights, level, trend, seasonal: Float64Array.from(seasonal) }).errors;
  const nothing = errors(0, 0, [0, 0, 0, 0]), seen = [...y.keys()].filter((t) => !Number.isNaN(y[t]));

  it("are those of least squares on the errors of the filter", () => {
    const units = [errors(1, 0, [0, 0, 0, 0]), errors(0, 1, [0, 0, 0, 0]), errors(0, 0, [1, 0, 0, -1]), errors(0, 0, [0, 1, 0, -1]), errors(0, 0, [0, 0, 1, -1])];
    const x = Float64Array.from(seen.flatMap((t) => units.map((unit) => nothing[t] - unit[t])));
    const { beta } = leastSquares(x, Float64Array.from(seen, (t) => nothing[t]), seen.length, units.length);
    const found = bestStates(new Likelihood(y, form), y, form, weights);
    [found.level, found.trend, ...found.seasonal.subarray(0, 3)].forEach((v, i) => expect(v).toBeCloseTo(beta[i], 7));
    expect(found.seasonal.reduce((a, b) => a + b, 0)).toBeCloseTo(0, 10);
  });
  it("rest on a curvature that the filter's answers to single states give, gaps or not", () => {
    const unit = (at: number, i: number) => (at === i ? 1 : 0);
    const units = [0, 1, 2, 3, 4, 5].map((i) => errors(unit(0, i), unit(1, i), [2, 3, 4, 5].map((at) => unit(at, i))).map((e, t) => nothing[t] - e));
    const found = curvatureOfStates(y, form, weights);
    for (let i = 0; i < 6; i++) for (let j = 0; j < 6; j++) expect(found[6 * i + j]).toBeCloseTo(units[i].reduce((sum, v, t) => sum + v * units[j][t], 0), 9);
  });
});

describe("an estimate of smoothing", () => {
  const airline = referenceSeries("airline").values;
  it("is not beaten by any of 400 places of the region, of the forms whose starting states follow from the weights", () => {
    const random = seeded(8);
    for (const trend of ["none", "additive"] as const) {
      const form: SmoothingForm = { error: "additive", trend, season: "additive", length: 12 }, likelihood = new Likelihood(airline, form);
      const best = estimateSmoothing(airline, form, trend !== "none").filtered.logLikelihood;
      for (let i = 0; i < 200; i++) {
        const alpha = random(), weights = { alpha, beta: trend === "none" ? 0 : alpha * random() ** 2, gamma: (1 - alpha) * random(), phi: trend === "none" ? 1 : 0.8 + 0.18 * random() };
        expect(likelihood.value({ ...weights, ...bestStates(likelihood, airline, form, weights) })).toBeGreaterThan(-2 * best - 1e-6);
      }
    }
  });
  it.each([["nile", "multiplicative", "multiplicative"], ["bjsales", "multiplicative", "additive"], ["lakehuron", "additive", "additive"]] as const)("misses no slow or fast maximum: nothing is won by holding alpha (%s, %s error, %s trend)", (id, error, trend) => {
    const { values } = referenceSeries(id), form: SmoothingForm = { error, trend, season: "none", length: 1 }, best = estimateSmoothing(values, form, true).filtered.logLikelihood;
    for (const alpha of [1e-4, 0.01, 0.3, 0.9999]) expect(estimateSmoothing(values, form, true, { alpha }).filtered.logLikelihood).toBeLessThan(best + 1e-5);
  });
  it.each(kinds)("from an earlier one is what a search from nothing finds, with a season that is %s", (kind) => {
    const form: SmoothingForm = { error: kind, trend: "additive", season: kind, length: 12 };
    const near = estimateSmoothing(airline.slice(0, 132), form, true).start;
    const again = estimateSmoothing(airline, form, true, {}, near).filtered.logLikelihood, anew = estimateSmoothing(airline, form, true).filtered.logLikelihood;
    expect(Math.abs(again - anew)).toBeLessThan(1e-5);
  });
  it("costs less than a thousand runs of the filter where an earlier one is near (2,000 values, season 24; a search by differences took five thousand and more)", () => {
    const normal = normals(seeded(3)), hours = Float64Array.from({ length: 2000 }, (_, t) => 100 + 10 * Math.sin((2 * Math.PI * t) / 24) + 2 * normal());
    const cost = (work: () => void): number => Math.min(...[0, 1, 2].map(() => { const before = process.cpuUsage().user; work(); return process.cpuUsage().user - before; }));
    for (const kind of kinds) {
      const form: SmoothingForm = { error: kind, trend: "additive", season: kind, length: 24 }, near = estimateSmoothing(hours.slice(0, 1980), form, true).start;
      const filter = cost(() => { for (let i = 0; i < 200; i++) innovationsFilter(hours, form, near); }) / 200;
      expect(cost(() => estimateSmoothing(hours, form, true, {}, near))).toBeLessThan(1000 * filter);
    }
  });
});
