import { describe, expect, test } from "vitest";
import { checkOptions } from "../../cells/check.ts";
import { compare } from "../../cells/compare.ts";
import type { ChartPart, Part, TablePart, TextPart } from "../../cells/parts/part.ts";
import { cut, fit as estimate, makeSeries, rule } from "../../stdlib/index.ts";
import { drawnCharts } from "./drawn.ts";
import { madeContext } from "./madeContext.ts";
import { madeSeries, stepped } from "./made.ts";

const show = { name: "contest", width: 640 };
const texts = (parts: readonly Part[]): string => parts.filter((p): p is TextPart => p.part === "text").map(p => p.text).join(" ");
const tables = (parts: readonly Part[]): readonly TablePart[] => parts.filter((p): p is TablePart => p.part === "table");
const run = async (options: Record<string, unknown>, source: Record<string, string> = {}, changes = {}) => {
  const context = madeContext({ source, ...changes });
  return { result: await compare.run(checkOptions(compare, options) as never, context), context };
};
const steady = stepped(madeSeries(), [{ step: "log" }, { step: "difference", lag: 12 }]);
const numbered = (values: readonly number[]) => makeSeries({ name: "short", values: Float64Array.from(values) });

describe("the picture of forecasts from every origin", () => {
  test("lets any origin be picked, and says what came of its forecasts", async () => {
    // A line with one step: naive forecasts from before the step miss by 10 less what the line gains, those after by the line's slope.
    const values = Float64Array.from({ length: 30 }, (_, t) => t + (t >= 26 ? 10 : 0)), series = makeSeries({ name: "stock", unit: "t", values });
    const { result } = await run({ models: { naive: rule.naive(series) }, origins: 5, horizon: 1, levels: [0.9] });
    const chart = compare.show(result, show).find((part): part is ChartPart => part.part === "chart" && part.pick !== undefined)!;
    const { pick } = chart;
    expect(pick?.among.map(view => view.label)).toEqual(["25", "26", "27", "28", "29"]);
    expect(pick).toMatchObject({ label: "Origin", at: 4 });
    // The 26th value is 25, the 27th 36: the band of a walk with steps of 1 does not reach so far.
    expect(pick?.among[1].words).toBe("From 26 the forecasts missed by 11.0 t on average, more than from 4 of the other 4 origins. Of 1 value that came, 0 lay in the 90% band.");
    expect(pick?.among[1].data).toMatchObject({ origin: { time: [26] }, picked: { time: [26, 27], value: [25, 25] } });
    expect(chart.data).toMatchObject({ picked: { time: [29, 30] } });
    await expect(drawnCharts([chart, { ...chart, data: { ...chart.data, ...pick!.among[0].data } }])).resolves.toHaveLength(2);
  });
});

describe("the tables of held-out origins", () => {
  const find = (parts: readonly Part[], title: string): TablePart => tables(parts).find(table => table.title?.startsWith(title))!;
  test("hold every score, coverage with its range and the test between models, at each horizon too", async () => {
    const series = madeSeries(), { result } = await run({ models: { drift: rule.drift(series), average: rule.average(series) }, origins: 12, horizon: 3, levels: [0.8], rank: "smape" });
    if (result.how !== "origins") throw new Error("no origins");
    const parts = compare.show(result, show), [best] = result.models, scores = find(parts, "All scores"), at = (table: TablePart, title: string): number => table.columns.findIndex(column => column.title === title);
    expect(scores.columns.map(column => column.title)).toEqual(["model", "forecasts", "bias", "mean absolute error", "root mean squared error", "MAPE", "sMAPE", "MASE", "RMSSE", "pinball loss", "CRPS", "interval score 80%"]);
    expect([scores.rows[0][at(scores, "RMSSE")], scores.rows[0][at(scores, "interval score 80%")]]).toEqual([best.rmsse, best.intervalScore[0].score]);
    // The naive rule that was added stands last: it is what the others have to beat.
    expect(scores.rows.at(-1)?.[0]).toBe(result.naive.label);
    const held = find(parts, "How often the bands held, by"), second = result.scores.find(score => score.label === best.label && score.horizon === 2)!;
    expect(held.columns.slice(2, 5).map(column => column.title)).toEqual(["1", "2", "3"]);
    expect(held.rows[0].slice(3, 4)).toEqual([second.coverage[0].share]);
    // Of 12 tries with 0.8 each, 7 to 12 are within the exact binomial range: P(X <= 6) = 0.019, P(X <= 7) = 0.073 (summed by hand from the binomial formula).
    expect(held.rows[0].slice(5, 7)).toEqual([7 / 12, 1]);
    const p = find(parts, "p by how many periods ahead"), pair = result.against.find(row => row.horizon === 1 && row.a === "drift" && row.b === "average")!;
    expect(p.rows.find(row => row[0] === "drift against average")?.[1]).toBe(pair.p < 0.001 ? "< 0.001" : pair.p < 0.1 ? String(Number(pair.p.toPrecision(2))) : pair.p.toFixed(2));
    const lines = parts.find((part): part is ChartPart => part.part === "chart" && part.title.startsWith("sMAPE"))!;
    expect(new Set(lines.data.points.label as readonly string[])).toContain(result.naive.label);
  });
  test("of one origin claim nothing", async () => {
    const series = madeSeries(), { result } = await run({ models: { drift: rule.drift(series) }, origins: 1, horizon: 1 }), parts = compare.show(result, show);
    expect(texts(parts)).toContain("The MASE of drift was");
    expect(texts(parts)).toContain("1 origin is too few for a test 1 step ahead");
    expect(find(parts, "Errors over 1 origin, one period ahead").columns.map(column => column.title)).not.toContain("RMSSE");
    expect(find(parts, "How often the bands held what").rows.map(row => row.at(-1))).toEqual(["too few to tell", "too few to tell"]);
  });
});

describe("compare that the reader ends early", () => {
  const stopAfter = (count: number) => { let done = 0; return { progress: () => { done++; }, stopped: () => done >= count }; };
  test("shows the origins that all models finished, and says so before anything else", async () => {
    const series = madeSeries();
    // Two rules, both naive ones: two forecasts an origin.
    const { result } = await run({ models: { naive: rule.naive(series), season: rule.seasonalNaive(series, 12) }, origins: 20, horizon: 2 }, {}, stopAfter(25));
    expect(result).toMatchObject({ how: "origins", complete: false, done: 25, total: 40 });
    expect(result.how === "origins" && result.origins.length).toBe(12);
    const [first] = compare.show(result, show);
    expect(first).toMatchObject({ part: "text", tone: "caution", text: "Stopped early: scored on the first 12 of 20 origins, which every model had finished." });
  });
  test("a grid, several grids and a grid on its way to held-out origins keep the orders that were tried", async () => {
    for (const [options, tried, asked] of [[{ ar: 1, ma: 2 }, 4, 6], [{ ar: 1, ma: 2, season: [0, { ma: 1 }] }, 8, 12], [{ ar: 1, ma: 2, rank: "mase" }, 4, 6]] as const) {
      const { result } = await run({ series: steady, ...options }, {}, stopAfter(tried));
      expect(result).toMatchObject({ how: "criterion", complete: false, tried, asked });
      expect(compare.show(result, show).some(part => part.part === "text" && part.tone === "caution" && part.text === `Stopped early: ${tried} of ${asked} orders were tried.`)).toBe(true);
    }
  });
  test("what was computed from the same content is recalled by the cell's own memory", async () => {
    const kept = new Map<string, unknown>(), series = madeSeries();
    const recall = <T>(key: string, make: () => T): T => { if (!kept.has(key)) kept.set(key, make()); return kept.get(key) as T; };
    const options = { models: { model: estimate({ series: steady, ma: 1 }), naive: rule.naive(series) }, origins: 6, horizon: 2 };
    await run(options, {}, { recall });
    const made = kept.size;
    await run({ ...options, loss: "squared", rank: "crps" }, {}, { recall });
    expect([made > 0, kept.size]).toEqual([true, made]);
  });
});

describe("compare over a grid of orders", () => {
  test("fits every order, ranks by AICc, and reports progress by count", async () => {
    const { result, context } = await run({ series: steady, ar: 1, ma: 2 });
    expect(result.how).toBe("criterion");
    if (result.how !== "criterion") return;
    expect(result.tried).toBe(6);
    expect(context.steps.at(-1)).toEqual([6, 6]);
    const values = result.models.map(row => row.aicc);
    expect(values).toEqual([...values].sort((a, b) => a - b));
    expect(result.best).toBe(result.models.find(row => row.setAside === null));
    expect(result.models.reduce((sum, row) => sum + row.weight, 0)).toBeCloseTo(1, 12);
    expect(result.scores).toEqual([]);
  });
  test("draws the order surface with a tile a pair, and names its ties", async () => {
    const { result } = await run({ series: steady, ar: 1, ma: 2 });
    const parts = compare.show(result, show);
    const chart = parts.find((p): p is ChartPart => p.part === "chart")!;
    expect(chart.title).toContain("Order surface");
    expect(chart.data.tiles.column).toHaveLength(6);
    expect(chart.alt).toMatch(/^The smallest is at AR \d and MA \d; /);
    const [svg] = await drawnCharts(parts);
    expect(svg).toContain("best");
    if (result.how !== "criterion") throw new Error("expected a grid");
    // On this made series two mixed models reach the unit circle: they keep their place in the list and are not the best.
    expect(tables(parts)[0].marked).toEqual([{ row: result.models.findIndex(row => row.setAside === null), word: "best" }]);
    expect(texts(parts)).toContain("set aside");
    expect(texts(parts)).toContain("6 models were tried");
  });
  test("ranks by BIC where asked", async () => {
    const { result } = await run({ series: steady, ar: 1, ma: 1, rank: "bic" });
    if (result.how !== "criterion") throw new Error("expected a grid");
    const values = result.models.map(row => row.bic);
    expect(values).toEqual([...values].sort((a, b) => a - b));
  });
  test("takes a list of seasons as they stand, and ranks them together", async () => {
    const { result } = await run({ series: steady, ma: 1, season: [0, { ma: 1 }] });
    if (result.how !== "criterion") throw new Error("expected a grid");
    expect(result.asked).toBe(4);
    expect(result.models).toHaveLength(4);
  });
  test("takes one season as a fit does: the same for every model", async () => {
    const { result } = await run({ series: steady, ar: 1, season: { length: 12, ma: 1 } });
    if (result.how !== "criterion") throw new Error("expected a grid");
    expect(result.models.map(row => row.fit.options.season)).toEqual([{ length: 12, ar: 0, ma: 1 }, { length: 12, ar: 0, ma: 1 }]);
  });
  test("takes a season's length for what it is, instead of trying so many seasonal lags", async () => {
    await expect(run({ series: steady, ma: 1, season: 12 })).rejects.toThrow("season: 12 would try up to 12 seasonal lags; a season of 12 periods is {length: 12, ma: 1}");
  });
  test("draws a second surface where seasonal orders vary", async () => {
    const { result } = await run({ series: steady, ar: 1, ma: 0, season: 1 });
    const parts = compare.show(result, show);
    expect(parts.filter((p): p is ChartPart => p.part === "chart").map(p => p.title)).toEqual([
      "Order surface: how far AICc stands behind the best, each tile with its best seasonal orders",
      "Seasonal orders: how far AICc stands behind the best, each tile with its best plain orders",
    ]);
    await expect(drawnCharts(parts)).resolves.toHaveLength(2);
  });
  test("searches stepwise where asked, and draws its way", async () => {
    const { result } = await run({ series: steady, ar: 2, ma: 2, season: { ar: 1, ma: 1 }, search: "stepwise" });
    if (result.how !== "criterion" || !("path" in result)) throw new Error("expected a search");
    expect(result.path.length).toBeLessThan(36);
    expect(result.path.filter(step => step.moved).at(-1)?.label).toBe(result.best?.label);
    const parts = compare.show(result, show);
    expect(texts(parts)).toMatch(/The search tried \d+ models and moved \d+ times?: /);
    await expect(drawnCharts(parts)).resolves.toHaveLength(1);
    await expect(run({ series: steady, ar: [1, 2], search: "stepwise" })).rejects.toThrow("in a stepwise search ar is the largest number of lags");
  });
  test("goes on to held-out origins when an error ranks it", async () => {
    const { result, context } = await run({ series: steady, ma: 1, rank: "mae", origins: 6, horizon: 2 });
    expect(result.how).toBe("origins");
    expect(context.steps.at(-1)?.[0]).toBe(context.steps.at(-1)?.[1]);
  });
});

describe("compare of models", () => {
  const early = estimate({ series: steady, ma: 1, label: "later named" });
  const crossings = madeSeries();
  test("labels the models by the names in the author's list", async () => {
    const { result } = await run({ models: [early, rule.seasonalNaive(crossings, 12)], origins: 8, horizon: 3 }, { models: "[airline, rule.seasonalNaive(crossings, 12)]" });
    expect(result.models.map(model => model.label)).toContain("airline");
    expect(result.best?.label).toBe(result.models[0].label);
  });
  test("gives a score row a model and horizon, and one for all", async () => {
    const { result } = await run({ models: { airline: early, naive: rule.naive(crossings) }, origins: 8, horizon: 3 });
    const own = result.scores.filter(score => (score as { label: string }).label === "airline").map(score => (score as { horizon: unknown }).horizon);
    expect(own).toEqual([1, 2, 3, "all"]);
    expect(result.scores[0]).toHaveProperty("mase");
    expect(result.against[0]).toMatchObject({ horizon: expect.anything(), statistic: expect.any(Number), p: expect.any(Number) });
  });
  test("names the naive rule by its label, whatever words that has, and a small p-value by its bound", async () => {
    const { result } = await run({ models: { "the model": early, "the same month last year": rule.seasonalNaive(crossings, 12) }, origins: 24, horizon: 2 });
    expect(result.sentence).toMatch(/ the model (beats|did better than) the naive rule "the same month last year" /);
    expect(result.sentence).toContain("(p < 0.001)");
  });
  test("says of a rule that is worse than the naive one that it does not beat naive", async () => {
    const { result } = await run({ models: { mean: rule.average(crossings), seasonal: rule.seasonalNaive(crossings, 12) }, origins: 12, horizon: 2 });
    const parts = compare.show(result, show);
    expect(texts(parts)).toContain("mean does not beat naive.");
  });
  test("draws errors by horizon and the paths from each origin", async () => {
    const { result } = await run({ models: { airline: early, seasonal: rule.seasonalNaive(crossings, 12) }, origins: 12, horizon: 6 });
    const parts = compare.show(result, show);
    const svgs = await drawnCharts(parts);
    expect(svgs).toHaveLength(2);
    expect(svgs[0]).toContain("periods ahead");
    const [byHorizon, paths] = parts.filter((p): p is ChartPart => p.part === "chart");
    expect(byHorizon.full?.scores.crps).toHaveLength(result.scores.length);
    // Bit for bit what is in memory: both models, 12 origins, 6 periods each, and the naive rule that was added.
    expect(paths.full?.forecasts.median).toHaveLength((result.how === "origins" ? result.forecasts.length : 0) * 6);
    expect(Array.from(byHorizon.full?.scores.mase as readonly number[])).toEqual(result.scores.map(score => (score as { mase: number }).mase));
    expect(tables(parts).map(t => t.title)).toEqual([
      "Errors over 12 origins, 1 to 6 periods ahead", "How often the bands held what happened", "How often the bands held, by how many periods ahead",
      "Model against model, over all horizons", "p by how many periods ahead", "All scores",
    ]);
  });
  test("ranks fits by a criterion where asked", async () => {
    const { result } = await run({ models: { one: early, two: estimate({ series: steady, ar: 1 }) }, rank: "aic" });
    expect(result.how).toBe("criterion");
  });
  test("stops when newer work overtakes it", async () => {
    await expect(run({ models: [early], origins: 6, horizon: 1 }, {}, { breathe: async () => { throw new Error("overtaken"); } })).rejects.toThrow("overtaken");
  });
});

describe("compare refuses, in words for its author,", () => {
  test("neither models nor a series", async () => {
    await expect(run({})).rejects.toThrow("compare needs either `models`");
  });
  test("a criterion for a rule, which has no likelihood", async () => {
    await expect(run({ models: [rule.naive(madeSeries())], rank: "aicc" })).rejects.toThrow("is a rule and has no likelihood");
  });
  test("fits after different differences, and says why", async () => {
    const other = stepped(madeSeries(), [{ step: "log" }, { step: "difference", lag: 1 }]);
    await expect(run({ models: { a: estimate({ series: steady, ma: 1 }), b: estimate({ series: other, ma: 1 }) }, rank: "aicc" })).rejects.toThrow(/likelihoods are of different data/);
  });
  test("more origins than the data have", async () => {
    await expect(run({ models: [rule.naive(madeSeries())], origins: 100, horizon: 3 })).rejects.toThrow(/100 origins/);
  });
  test("a constant series, a short one, and orders that are no numbers", async () => {
    await expect(run({ series: numbered(Array.from({ length: 20 }, () => 3)), ar: 1 })).rejects.toThrow("is constant");
    await expect(run({ series: numbered([1, 2, 3]), ar: 1 })).rejects.toThrow("needs at least 8");
    await expect(run({ series: steady, ar: "2" })).rejects.toThrow("ar takes a number n, to try 0 to n");
  });
  test("models of two series", async () => {
    await expect(run({ models: [rule.naive(madeSeries()), rule.naive(cut({ ...madeSeries(), values: madeSeries().values.map(x => x + 1) }, {}))], origins: 4, horizon: 1 })).rejects.toThrow(/not of one series/);
  });
});
