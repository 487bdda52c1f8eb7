import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import { contentKey, type Recall } from "../../../stdlib/evaluation/contentKey.ts";
import { gridOfOrders } from "../../../stdlib/evaluation/gridOfOrders.ts";
import { rollingOrigins, type CompareOptions } from "../../../stdlib/evaluation/rollingOrigins.ts";
import { stepwiseOrders } from "../../../stdlib/evaluation/stepwiseOrders.ts";
import { rule } from "../../../stdlib/forecast/rules.ts";
import { makeSeries, type Series } from "../../../stdlib/series/series.ts";
import { applySteps } from "../../../stdlib/series/steps.ts";
import { referenceSeries } from "../forecast/reference.ts";

const airline = (n = 144): Series => {
  const { times, values } = referenceSeries("airline");
  return makeSeries({ name: "passengers", every: "P1M", start: times[0], values: values.slice(0, n) });
};
const seasonal = (series: Series, ma = 1) => fit({ series: applySteps(series, [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]), ma, season: { length: 12, ma: 1 } });
const models = (s: Series, ma = 1) => ({ model: seasonal(s, ma), drift: rule.drift(s) });

/** Keeps everything, and counts what had to be made. */
function counted(): { readonly recall: Recall; made(): { estimates: number; forecasts: number } } {
  const kept = new Map<string, unknown>();
  let estimates = 0, forecasts = 0;
  return {
    recall<T>(key: string, make: () => T): T {
      if (kept.has(key)) return kept.get(key) as T;
      const value = make();
      if (key.startsWith("estimate")) estimates++; else forecasts++;
      kept.set(key, value);
      return value;
    },
    made() { const made = { estimates, forecasts }; estimates = 0; forecasts = 0; return made; },
  };
}

describe("what was computed from the same content is not computed again", () => {
  const usual: CompareOptions = { origins: 10, horizon: 6, levels: [0.8] };
  /** Runs as usual, then changed; gives what the second run had to make, having checked that memory changes no figure. */
  async function second(change: Partial<CompareOptions>, given = models(airline())) {
    const { recall, made } = counted();
    await rollingOrigins(models(airline()), usual, { recall });
    made();
    const again = await rollingOrigins(given, { ...usual, ...change }, { recall });
    expect(again).toEqual(await rollingOrigins(given, { ...usual, ...change }));
    return made();
  }
  // Four forecasters: the two models, and the two naive rules that stand beside them.
  it("another loss, or another error to rank by, makes nothing", async () => {
    expect(await second({ loss: "squared" })).toEqual({ estimates: 0, forecasts: 0 });
    expect(await second({ rank: "crps" })).toEqual({ estimates: 0, forecasts: 0 });
  });
  it("other levels estimate nothing", async () => { expect(await second({ levels: [0.5, 0.95] })).toEqual({ estimates: 0, forecasts: 40 }); });
  it("a shorter horizon lets one more origin in, and estimates only there", async () => { expect(await second({ horizon: 5 })).toEqual({ estimates: 4, forecasts: 40 }); });
  it("more origins estimate at the new ones only", async () => {
    // 1959-06 to 1959-08 are new, and their anchor of December or January before them.
    expect((await second({ origins: 13 })).forecasts).toBe(4 * 3);
  });
  it("a changed model is the only one that is estimated", async () => {
    const { estimates, forecasts } = await second({}, models(airline(), 2));
    expect(forecasts).toBe(10);
    expect(estimates).toBeLessThanOrEqual(12);
  });
  it("a further month is one further origin", async () => {
    const { recall, made } = counted();
    await rollingOrigins(models(airline(143)), usual, { recall });
    made();
    await rollingOrigins(models(airline()), usual, { recall });
    // One new estimate a forecaster; forecasts whose horizon has not changed are kept too.
    expect(made()).toEqual({ estimates: 4, forecasts: 4 });
  });
  it("an estimate is the same whichever other origins are asked for", async () => {
    const few = await rollingOrigins(models(airline()), { ...usual, origins: 3 }), many = await rollingOrigins(models(airline()), { ...usual, origins: 20 });
    const last = (found: typeof few) => found.forecasts.filter((f) => f.label === "model").at(-1)!;
    expect(last(few).median).toEqual(last(many).median);
  });
});

describe("a grid and a search fit an order once", () => {
  const series = applySteps(airline(), [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]);
  const fits = () => { const kept = new Map<string, unknown>(); const recall: Recall = <T>(key: string, make: () => T): T => { if (!kept.has(key)) kept.set(key, make()); return kept.get(key) as T; }; return { kept, recall }; };
  it("another criterion fits nothing, and a wider grid only the new orders", async () => {
    const { kept, recall } = fits();
    await gridOfOrders({ series, ar: 1, ma: 1 }, { recall });
    expect(kept.size).toBe(4);
    const bic = await gridOfOrders({ series, ar: 1, ma: 1, rank: "bic" }, { recall });
    expect(kept.size).toBe(4);
    expect(bic).toEqual(await gridOfOrders({ series, ar: 1, ma: 1, rank: "bic" }));
    await gridOfOrders({ series, ar: 1, ma: 2 }, { recall });
    expect(kept.size).toBe(6);
  });
  it("a search takes its way again without fitting", async () => {
    const { kept, recall } = fits(), options = { series, ar: 2, ma: 2, season: { length: 12, ar: 1, ma: 1 } };
    const once = await stepwiseOrders(options, { recall }), made = kept.size, again = await stepwiseOrders(options, { recall });
    expect(kept.size).toBe(made);
    expect(again).toEqual(once);
  });
});

describe("contentKey", () => {
  const s = airline();
  it("is the same for the same content, and another for any other value, sign, place or length", () => {
    expect(contentKey({ a: s, b: [1, "x", null] })).toBe(contentKey({ a: airline(), b: [1, "x", null] }));
    const values = Float64Array.of(1, 2, 3, 4), key = contentKey(values);
    for (const other of [[1, 2, 3, 4 + 1e-15 * 4], [2, 1, 3, 4], [1, 2, 3, -4], [1, 2, 3], [1, 2, 3, 4, 0], [1, 2, 3, NaN], [0, 0, 0, 0], [-0, 0, 0, 0]]) expect(contentKey(Float64Array.from(other)), String(other)).not.toBe(key);
    expect(contentKey(Float64Array.of(0))).not.toBe(contentKey(Float64Array.of(-0)));
    expect(contentKey("1")).not.toBe(contentKey(1));
  });
  it("leaves out the times of a series, which its start and spacing give, and nothing else of that name", () => {
    expect(contentKey(s)).not.toContain(s.times[5]);
    const other = makeSeries({ ...s, values: s.values.map((value) => value + 1) });
    expect(contentKey({ regressors: { times: s } })).not.toBe(contentKey({ regressors: { times: other } }));
  });
  it("tells names apart that hold the marks between names", () => {
    expect(contentKey({ "a:1,b": 2 })).not.toBe(contentKey({ a: 1, b: 2 }));
  });
  it("tells a hundred thousand neighbouring series apart", () => {
    const seen = new Set<string>(), values = new Float64Array(8);
    for (let i = 0; i < 100_000; i++) { values[i % 8] += 1; seen.add(contentKey(values)); }
    expect(seen.size).toBe(100_000);
  });
});
