// The kinds in one notebook, computed by the engine: the names of their values are what notebooks depend on.

import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { compute, type Computed } from "../../runtime/host/headless.ts";
import { drawnCharts } from "./drawn.ts";
import { madeSeries } from "./made.ts";

const cells: Readonly<Record<string, readonly string[]>> = {
  "load: crossings": ['file: "counts.csv"', 'unit: "vehicles"'],
  "slider: q": ["from: 1", "to: 3", "at: 1"],
  "window: sample": ["of: crossings", 'to: "2022-12"'],
  "transform: steady": ["series: crossings", "window: sample", "steps: [log, difference(12)]"],
  "stationarity: steadiness": ["series: steady"],
  "correlogram: shape": ["series: steady", "lags: 24", "model: airline"],
  "fit: airline": ["series: steady", "ma: q", "season: {ma: 1}"],
  "diagnostics: leftover": ["model: airline"],
  "compare: orders": ["series: steady", "ar: 1", "ma: 1", "season: {ma: 1}"],
  "compare: search": ["series: steady", "ar: 1", "ma: 1", 'search: "stepwise"'],
  "compare: contest": ["models: [airline, rule.seasonalNaive(crossings)]", "origins: 8", "horizon: 3"],
  "forecast: ahead": ["model: contest.best", "horizon: 12", 'totals: "year"', "threshold: 1500", "data: crossings"],
  "sweep: hinge": ["over: q", "measure: {aicc: airline.aicc, noise: ljungBox(airline, 12).p > 0.05}"],
};

/** Every name that the language promises of these kinds. */
const promised = [
  "steadiness.adf.statistic", "steadiness.adf.p", "steadiness.adf.lags", "steadiness.adf.critical[\"5%\"]", "steadiness.kpss.p", "steadiness.phillipsPerron.statistic", "steadiness.dfGls.statistic",
  "shape.acf[0]", "shape.pacf[1]", "shape.band.acf[1]", "shape.outside.acf.length", "shape.suggests.ar", "shape.suggests.ma",
  "airline.theta[0]", "airline.seasonalTheta[0]", "airline.se.theta[0]", "airline.sigma2", "airline.logLikelihood", "airline.aic", "airline.aicc", "airline.bic", "airline.k", "airline.n", "airline.mean", "airline.constant", "airline.residuals.n", "airline.roots.ma[0].modulus", "airline.label",
  "leftover.ljungBox.statistic", "leftover.ljungBox.p", "leftover.ljungBox.df", "leftover.jarqueBera.p", "leftover.archLM.p", "leftover.outliers.found.length",
  "orders.best.label", "orders.best.weight", "orders.best.fit.k", "orders.models[0].aicc", "orders.models.length", "search.path.length",
  "contest.best.label", "contest.best.mase", "contest.models.length", "contest.scores[0].crps", "contest.scores[0].rmse", "contest.scores[0].coverage[0].share", "contest.against[0].p", "contest.against[0].a", "contest.against[0].horizon",
  "ahead.times[0]", "ahead.mean[0]", "ahead.median[11]", "ahead.se[0]", "ahead.bands[1].level", "ahead.bands[1].low[0]", "ahead.bands[1].high[0]", "ahead.totals[0].mean", "ahead.totals[0].from", "ahead.totals[0].bands[0].low", "ahead.passing[0].ever",
  "hinge.rows.length", "hinge.rows[0].aicc", "hinge.rows[2].noise", "hinge.rows[0].present",
];

let folder = "", computed: Computed;

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), "together-"));
  const { times, values } = madeSeries();
  writeFileSync(join(folder, "counts.csv"), ["month,crossings", ...times.map((time, i) => `${time},${values[i]}`)].join("\n"));
  const text = ["# Together", ...Object.entries(cells).map(([head, body]) => ["```" + head, ...body, "```"].join("\n")), ...promised.map(name => `[0](<=${name.replaceAll("<", "\\<").replaceAll(">", "\\>")}>)`)].join("\n\n");
  computed = await compute({ text, folder, settings: [], allowCode: false });
}, 60_000);
afterAll(() => { rmSync(folder, { recursive: true, force: true }); });

describe("the kinds in one notebook", () => {
  test("are all current", () => {
    expect(computed.cells.filter(cell => cell.state !== "current").map(cell => `${cell.kind}: ${cell.name} ${cell.state} ${cell.message}`)).toEqual([]);
    expect(computed.cells).toHaveLength(Object.keys(cells).length);
  });
  test("give every value under the name that the language promises", () => {
    const missing = computed.numbers.filter(number => number.value === null || number.value === undefined);
    expect(missing.map(number => `${number.expression}: ${number.message}`)).toEqual([]);
    expect(computed.numbers).toHaveLength(promised.length);
  });
  test("draw what they show", async () => {
    for (const cell of computed.cells) await drawnCharts(cell.show ?? []);
  });
  test("say nothing that is no word or number", () => {
    const texts = computed.cells.flatMap(cell => (cell.show ?? []).flatMap(part => part.part === "text" ? [part.text] : part.part === "chart" ? [part.title, part.alt] : []));
    expect(texts.length).toBeGreaterThan(20);
    expect(texts.filter(text => /NaN|undefined|\[object|null(?! hyp)/.test(text))).toEqual([]);
  });
});
