// What held-out origins show: the verdict in words, errors by horizon, forecasts against what happened, how honest the bands were.

import { milliseconds, type Evaluation } from "../../stdlib/index.ts";
import { originsChart } from "./originsChart.ts";
import { details } from "./part.ts";
import type { Columns, Part, TablePart, TextPart } from "./part.ts";
import { scoreChart } from "./scoreChart.ts";
import { count, figure, listOf, percent, pText } from "./words.ts";

type Model = Evaluation["models"][number];

const mostPairs = 15;

export function evaluationParts(result: Evaluation, every: string | null): readonly Part[] {
  const losers = result.models.filter(model => model.beatsNaive === "no" && model.label !== result.naive.label && !isNaive(model));
  return [
    ...result.notes.filter(endedEarly).map((text): TextPart => ({ part: "text", tone: "caution", text })),
    { part: "text", text: result.sentence },
    ...(losers.length > 0 ? [{ part: "text" as const, tone: "caution" as const, text: `${listOf(losers.map(model => model.label))} ${losers.length === 1 ? "does" : "do"} not beat naive.` }] : []),
    standingsTable(result),
    ...(result.horizon > 1 ? [horizonChart(result)] : []),
    ...pathsChart(result, every),
    ...details([coverageTable(result), ...pairParts(result)]),
    ...result.notes.filter(text => !endedEarly(text)).map((text): TextPart => ({ part: "text", tone: "note", text })),
    ...failureParts(result),
  ];
}

/** What was not reached bounds all that is said after it. */
function endedEarly(note: string): boolean {
  return note.startsWith("Stopped early");
}

function isNaive(model: Model): boolean {
  return "rule" in model.model && (model.model.rule === "naive" || model.model.rule === "seasonalNaive");
}

const names: Readonly<Record<Evaluation["rankedBy"], string>> = {
  mase: "MASE", mae: "mean absolute error", rmse: "root mean squared error", rmsse: "RMSSE", mape: "MAPE", smape: "sMAPE", crps: "CRPS", pinball: "pinball loss",
};

/** Title of a score's axis. */
function measureTitle(result: Evaluation): string {
  const { rankedBy, unit } = result;
  if (rankedBy === "mape" || rankedBy === "smape") return `${names[rankedBy]} (%)`;
  if (rankedBy === "mase" || rankedBy === "rmsse") return `${names[rankedBy]} (1 = naive errors in training)`;
  return unit ? `${names[rankedBy]} (${unit})` : names[rankedBy];
}

function standingsTable(result: Evaluation): TablePart {
  const { rankedBy, unit } = result;
  const ranked = rankedBy === "mase" || rankedBy === "mae" || rankedBy === "rmse" ? [] : [rankedBy];
  const rows = result.models.map(model => model);
  const naive = result.models.some(model => model.label === result.naive.label) ? [] : [result.naive];
  return {
    part: "table", title: `Errors over ${count(result.origins.length, "origin")}, 1 to ${result.horizon} periods ahead`,
    columns: [
      { title: "place", align: "right", format: "d" }, { title: "model" },
      ...ranked.map(key => ({ title: names[key], align: "right" as const, format: ",.3~r" })),
      { title: "MASE", align: "right", format: ",.3f" }, { title: "mean absolute error", align: "right", format: ",.4~r", unit },
      { title: "root mean squared error", align: "right", format: ",.4~r", unit }, { title: "bias", align: "right", format: "+,.3~r", unit },
      { title: "MAPE", align: "right", format: ",.1f", unit: "%" }, { title: "CRPS", align: "right", format: ",.4~r", unit },
      { title: "beats naive" },
    ],
    rows: [
      ...rows.map(model => [model.rank, model.label, ...ranked.map(key => model[key]), model.mase, model.mae, model.rmse, model.bias, model.mape, model.crps, isNaive(model) ? "is a naive rule" : model.beatsNaive]),
      ...naive.map(score => [null, score.label, ...ranked.map(key => score[key]), score.mase, score.mae, score.rmse, score.bias, score.mape, score.crps, "the rule to beat"]),
    ],
    marked: [{ row: 0, word: "best" }],
    note: `Bias is what happened less the forecast: above zero, forecasts were too low. ${setSentence(result)}`,
  };
}

function setSentence(result: Evaluation): string {
  const { confidenceSet, models } = result;
  if (confidenceSet.status === "unavailable") return `No model confidence set: ${confidenceSet.note}.`;
  const inside = models.filter(model => model.inSet);
  return inside.length === models.length
    ? `The ${percent(confidenceSet.level)} model confidence set holds all of them: these origins do not tell them apart.`
    : `The ${percent(confidenceSet.level)} model confidence set holds ${listOf(inside.map(model => model.label))}.`;
}

function horizonChart(result: Evaluation): Part {
  const { rankedBy } = result;
  const lines = result.models.map(model => {
    const rows = result.scores.filter(score => score.label === model.label && score.horizon !== "all");
    return { label: model.label, horizons: rows.map(row => row.horizon as number), values: rows.map(row => row[rankedBy]) };
  });
  const naive = result.scores.filter(score => score.label === result.naive.label && score.horizon !== "all");
  if (!result.models.some(model => model.label === result.naive.label) && naive.length > 0) {
    lines.push({ label: result.naive.label, horizons: naive.map(row => row.horizon as number), values: naive.map(row => row[rankedBy]) });
  }
  const chart = scoreChart(`${names[rankedBy]} by how far ahead`, horizonAlt(result, lines), measureTitle(result), lines, rankedBy === "mase" || rankedBy === "rmsse" ? 1 : null);
  return { ...chart, full: { scores: allScores(result.scores) } };
}

/** Every score of every model and horizon, for whoever takes the data out. */
function allScores(scores: Evaluation["scores"]): Columns {
  const measures = ["n", "bias", "mae", "rmse", "mape", "smape", "mase", "rmsse", "pinball", "crps"] as const;
  const levels = scores[0]?.coverage.map(row => row.level) ?? [];
  return {
    model: scores.map(score => score.label), horizon: scores.map(score => String(score.horizon)),
    ...Object.fromEntries(measures.map(name => [name, scores.map(score => score[name])])),
    ...Object.fromEntries(levels.flatMap((level, i) => [
      [`interval score ${percent(level)}`, scores.map(score => score.intervalScore[i].score)], [`coverage ${percent(level)}`, scores.map(score => score.coverage[i].share)],
    ])),
  };
}

function horizonAlt(result: Evaluation, lines: readonly { readonly label: string; readonly values: readonly number[] }[]): string {
  const best = result.best.label;
  const steps = lines[0]?.values.length ?? 0;
  let leads = 0;
  for (let h = 0; h < steps; h++) {
    const least = Math.min(...lines.map(line => line.values[h]).filter(Number.isFinite));
    if (lines.find(line => line.label === best)?.values[h] === least) leads++;
  }
  const own = lines.find(line => line.label === best)?.values ?? [];
  return `${best} is best at ${leads} of ${steps} horizons; its ${names[result.rankedBy]} goes from ${figure(own[0] ?? NaN)} one period ahead to ${figure(own[own.length - 1] ?? NaN)} at ${steps}.`;
}

/** The best model's forecasts from each origin beside what happened, with what came before for one more horizon. */
function pathsChart(result: Evaluation, every: string | null): readonly Part[] {
  const { observed, horizon, unit } = result, own = result.forecasts.filter(one => one.label === result.best.label);
  const all = milliseconds(observed.start, every, observed.n), place = new Map(observed.times.map((time, t) => [time, t])), first = place.get(own[0].origin) ?? 0;
  const shown = Math.max(0, first - horizon), end = Math.min(observed.n, first + own.length + horizon);
  const misses = own.map(meanMiss), known = misses.filter(Number.isFinite), worst = known.length > 0 ? misses.indexOf(Math.max(...known)) : -1;
  const chart = originsChart({
    title: `Forecasts of ${result.best.label} from each origin, and what happened`,
    alt: `From ${own[0].origin} to ${own[own.length - 1].origin}, ${count(own.length, "path")} of forecasts beside the observed values.${worst < 0 ? "" : ` The largest misses were from ${own[worst].origin}, ${sizeOf(misses[worst], unit)} on average.`}`,
    axis: unit ? `${result.name} (${unit})` : result.name, dated: every !== null,
    actual: { time: all.slice(shown, end), value: observed.values.slice(shown, end) },
    paths: own.map((one, k) => {
      const at = first + k;
      return { origin: one.origin, from: { time: all[at], value: observed.values[at] }, time: all.slice(at + 1, at + 1 + horizon), value: one.median, bands: one.bands, words: originWords(result, one, misses, k) };
    }),
  });
  return [{ ...chart, full: { forecasts: allForecasts(result.forecasts) } }];
}

/** What came of the forecasts from one origin. */
function originWords(result: Evaluation, one: Evaluation["forecasts"][number], misses: readonly number[], k: number): string {
  const reason = result.failures.find(failure => failure.label === one.label && failure.origin === one.origin)?.reason;
  if (reason !== undefined) return `From ${one.origin} there is no forecast: ${reason}.`;
  const seen = one.actual.filter(Number.isFinite).length;
  if (Number.isNaN(misses[k])) return `From ${one.origin}: nothing was observed over the horizon.`;
  const smaller = misses.filter((miss, i) => i !== k && miss < misses[k]).length, others = misses.filter((miss, i) => i !== k && Number.isFinite(miss)).length;
  const held = one.bands.map(band => `${one.actual.reduce((sum, y, h) => sum + (y >= band.low[h] && y <= band.high[h] ? 1 : 0), 0)} lay in the ${percent(band.level)} band`);
  return `From ${one.origin} the forecasts missed by ${sizeOf(misses[k], result.unit)} on average${others === 0 ? "" : `, more than from ${smaller} of the other ${count(others, "origin")}`}.${held.length === 0 ? "" : ` Of ${count(seen, "value")} that came, ${listOf(held)}.`}`;
}

function sizeOf(value: number, unit: string): string {
  return unit ? `${figure(value)} ${unit}` : figure(value);
}

/** Every forecast of every model beside what happened. */
function allForecasts(forecasts: Evaluation["forecasts"]): Columns {
  const rows = forecasts.flatMap(one => one.times.map((time, i) => ({ one, time, i })));
  const levels = forecasts[0]?.bands.map(band => band.level) ?? [];
  return {
    model: rows.map(row => row.one.label), origin: rows.map(row => row.one.origin), time: rows.map(row => row.time),
    actual: Float64Array.from(rows, row => row.one.actual[row.i]), mean: Float64Array.from(rows, row => row.one.mean[row.i]), median: Float64Array.from(rows, row => row.one.median[row.i]),
    ...Object.fromEntries(levels.flatMap((level, k) => [
      [`low ${percent(level)}`, Float64Array.from(rows, row => row.one.bands[k].low[row.i])], [`high ${percent(level)}`, Float64Array.from(rows, row => row.one.bands[k].high[row.i])],
    ])),
  };
}

function meanMiss(one: Evaluation["forecasts"][number]): number {
  let sum = 0, n = 0;
  one.actual.forEach((value, i) => { const miss = Math.abs(value - one.median[i]); if (Number.isFinite(miss)) { sum += miss; n++; } });
  return n > 0 ? sum / n : NaN;
}

function coverageTable(result: Evaluation): TablePart {
  return {
    part: "table", title: "How often the bands held what happened",
    columns: [
      { title: "model" }, { title: "band", align: "right", format: ".0%" }, { title: "held", align: "right", format: ".1%" },
      { title: "chance allows from", align: "right", format: ".0%" }, { title: "to", align: "right", format: ".0%" }, { title: "reading" },
    ],
    rows: result.models.flatMap(model => model.coverage.map(row => [
      model.label, row.level, row.share, row.low, row.high,
      Number.isNaN(row.share) ? "not scored" : row.within ? "as promised" : row.share < row.low ? "too narrow" : "too wide",
    ])),
    note: "The range is the exact 95% binomial one for independent tries.",
  };
}

function pairParts(result: Evaluation): readonly Part[] {
  const rows = result.against.filter(row => row.horizon === "all");
  if (rows.length === 0) return [];
  const shown = rows.slice(0, mostPairs);
  return [{
    part: "table", title: "Model against model, over all horizons",
    columns: [{ title: "pair" }, { title: "smaller errors" }, { title: "by", align: "right", format: ",.3~r" }, { title: "p", align: "right" }, { title: "reading" }],
    rows: shown.map(row => [
      `${row.a} against ${row.b}`, row.meanDifference === 0 ? "neither" : row.meanDifference < 0 ? row.a : row.b, Math.abs(row.meanDifference),
      Number.isNaN(row.p) ? "–" : pText(row.p).replace(/^p (= )?/, ""),
      Number.isNaN(row.p) ? row.note ?? "no test" : row.p < 0.05 ? "more than chance" : "may be chance",
    ]),
    note: `Equal accuracy is the null hypothesis (Diebold and Mariano 1995, as corrected by Harvey, Leybourne and Newbold 1997).${rows.length > shown.length ? ` The first ${shown.length} of ${rows.length} pairs.` : ""}`,
  }];
}

function failureParts(result: Evaluation): readonly Part[] {
  if (result.failures.length === 0) return [];
  return [{
    part: "table", title: "Forecasts that could not be made", columns: [{ title: "model" }, { title: "origin" }, { title: "reason" }],
    rows: result.failures.slice(0, 20).map(one => [one.label, one.origin, one.reason]),
    ...(result.failures.length > 20 ? { note: `The first 20 of ${result.failures.length}.` } : {}),
  }];
}
