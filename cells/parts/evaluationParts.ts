// What held-out origins show: the verdict in words, errors by horizon, forecasts against what happened, how honest the bands were.

import { milliseconds, type Evaluation } from "../../stdlib/index.ts";
import { originsChart } from "./originsChart.ts";
import { details } from "./part.ts";
import type { Columns, Part, TextPart } from "./part.ts";
import { scoreChart } from "./scoreChart.ts";
import { coverageTables, failureTables, isNaive, measureNames as names, pairTables, scoreColumns, scoreTable, standingsTable } from "./evaluationTables.ts";
import { count, figure, listOf, percent } from "./words.ts";

export function evaluationParts(result: Evaluation, every: string | null): readonly Part[] {
  const losers = result.models.filter(model => model.beatsNaive === "no" && model.label !== result.naive.label && !isNaive(model));
  return [
    ...result.notes.filter(endedEarly).map((text): TextPart => ({ part: "text", tone: "caution", text })),
    { part: "text", text: result.sentence },
    ...(losers.length > 0 ? [{ part: "text" as const, tone: "caution" as const, text: `${listOf(losers.map(model => model.label))} ${losers.length === 1 ? "does" : "do"} not beat naive.` }] : []),
    standingsTable(result),
    ...(result.horizon > 1 ? [horizonChart(result)] : []),
    ...pathsChart(result, every),
    ...details([...coverageTables(result), ...pairTables(result), scoreTable(result)]),
    ...result.notes.filter(text => !endedEarly(text)).map((text): TextPart => ({ part: "text", tone: "note", text })),
    ...failureTables(result),
  ];
}

/** What was not reached bounds all that is said after it. */
function endedEarly(note: string): boolean {
  return note.startsWith("Stopped early");
}

/** Title of a score's axis. */
function measureTitle(result: Evaluation): string {
  const { rankedBy, unit } = result;
  if (rankedBy === "mape" || rankedBy === "smape") return `${names[rankedBy]} (%)`;
  if (rankedBy === "mase" || rankedBy === "rmsse") return `${names[rankedBy]} (1 = naive errors in training)`;
  return unit ? `${names[rankedBy]} (${unit})` : names[rankedBy];
}

function horizonChart(result: Evaluation): Part {
  const { rankedBy } = result;
  const lines = result.models.map(model => {
    const rows = result.scores.filter(score => score.label === model.label && score.horizon !== "all");
    return { label: model.label, horizons: rows.map(row => row.horizon as number), values: rows.map(row => row[rankedBy]) };
  });
  const naive = result.naiveScores.filter(score => score.horizon !== "all");
  if (!result.models.some(model => model.label === result.naive.label)) lines.push({ label: result.naive.label, horizons: naive.map(row => row.horizon as number), values: naive.map(row => row[rankedBy]) });
  const chart = scoreChart(`${names[rankedBy]} by how far ahead`, horizonAlt(result, lines), measureTitle(result), lines, rankedBy === "mase" || rankedBy === "rmsse" ? 1 : null);
  return { ...chart, full: { scores: scoreColumns([...result.scores, ...(lines.length > result.models.length ? result.naiveScores : [])]) } };
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
