// What diagnostic checking shows: question by question what the residuals still hold, then the pictures that say where.

import { rejects, timesMs, type Diagnostics, type OutlierType, type Test } from "../../stdlib/index.ts";
import { timeField } from "./fanChart.ts";
import { lagChart } from "./lagChart.ts";
import { details } from "./part.ts";
import type { ChartPart, Part, TablePart, TextPart } from "./part.ts";
import { pathChart } from "./pathChart.ts";
import { pValueChart } from "./pValueChart.ts";
import { quantileChart } from "./quantileChart.ts";
import { largeInWords, largeResiduals, residualChart } from "./residualChart.ts";
import { count, figure, lagsInWords, percent, pText } from "./words.ts";

/** One question about the residuals, the tests that speak to it, and what to try where they find something. */
interface Question {
  readonly asked: string;
  readonly tests: readonly Test[];
  readonly found: string; readonly notFound: string;
  readonly remedy: string;
}

export function diagnosticsParts(result: Diagnostics, width: number): readonly Part[] {
  if (result.acf.length === 0) return [{ part: "text", tone: "caution", text: result.sentence }];
  return [
    { part: "text", text: result.sentence },
    questionTable(result),
    timePart(result, width),
    ...outlierParts(result),
    ...details([
      pValuePart(result), acfPart(result), ...(result.qq.sample.length > 0 ? [quantilePart(result)] : []), ...rhythmPart(result, width), ...levelPart(result, width),
    ]),
    ...result.notes.map((text): TextPart => ({ part: "text", tone: "note", text })),
  ];
}

function questions(result: Diagnostics): readonly Question[] {
  return [
    { asked: "Can the past still predict them?", tests: [result.ljungBox, result.monti], found: "yes, beyond chance", notFound: "no sign of it", remedy: "add a term at the lags that stand out" },
    { asked: "Does a rhythm remain?", tests: [result.cumulativePeriodogram], found: "yes, at some frequency", notFound: "no sign of it", remedy: "look for a season that the model lacks" },
    { asked: "Does their spread change?", tests: [result.archLM, result.mcleodLi], found: "yes, large ones cluster", notFound: "no sign of it", remedy: "a log or Box-Cox step; the bands are too narrow at times, too wide at others" },
    { asked: "Does their level move?", tests: [result.cusum, result.break], found: "yes, it shifts", notFound: "no sign of it", remedy: `${result.break.at === undefined ? "a levelShift regressor at the date" : `levelShift("${result.break.at}") as a regressor`}, or a shorter window` },
    { asked: "Are they shaped like a normal distribution?", tests: [result.jarqueBera], found: "no: skewed or heavy-tailed", notFound: "nothing against it", remedy: "look at the largest ones; bands: \"simulated\" resamples them" },
  ];
}

function questionTable(result: Diagnostics): TablePart {
  const small = 1 - result.level;
  return {
    part: "table", title: "What the residuals still hold",
    columns: [{ title: "question" }, { title: "answer" }, { title: "evidence" }, { title: "what to try" }],
    rows: questions(result).map(question => {
      const usable = question.tests.filter(test => test.status !== "unavailable" && !Number.isNaN(test.p));
      const finds = usable.some(test => rejects(test, small) === true);
      const disagree = finds && usable.some(test => rejects(test, small) !== true);
      const answer = usable.length === 0 ? "cannot be said" : finds ? question.found + (disagree ? " (the tests disagree)" : "") : question.notFound;
      return [question.asked, answer, question.tests.map(evidence).join("; "), finds ? question.remedy : ""];
    }),
    note: `Each answer is read at the ${percent(small)} level; of twenty tests of a good model about one would find something by chance. "No sign" does not show that there is nothing.`,
  };
}

function evidence(test: Test): string {
  const name = test.name ?? "test";
  if (test.status === "unavailable" || Number.isNaN(test.p)) return `${name}: ${test.note ?? "not available"}`;
  return `${name} ${figure(test.statistic, 3)}${test.df === undefined || test.df === null ? "" : ` on ${test.df} df`}, ${pText(test.p, test.bound).replace(/ /g, "\u00a0")}`; // kept on one line
}

function pValuePart(result: Diagnostics): ChartPart {
  const small = 1 - result.level;
  const rows = result.portmanteau;
  const usable = rows.ljungBox.filter(row => row.df !== null && !Number.isNaN(row.p));
  const below = usable.filter(row => row.p < small);
  const none = rows.ljungBox.length - usable.length;
  const start = none > 0 ? ` Up to lag ${none} no degrees of freedom are left.` : "";
  const alt = below.length === 0
    ? `The Ljung-Box p-value stays above ${figure(small, 2)} at each lag where it is defined.${start}`
    : `The Ljung-Box p-value is below ${figure(small, 2)} where the lags up to ${lagsInWords(below.map(row => row.lag), 6)} are taken together.${start}`;
  return pValueChart("Is anything left to predict, taking lags together?", alt, [
    { label: "Ljung-Box", rows: rows.ljungBox }, { label: "Box-Pierce", rows: rows.boxPierce }, { label: "Monti", rows: rows.monti },
  ], small);
}

function timePart(result: Diagnostics, width: number): ChartPart {
  const large = largeResiduals(result.standardised);
  const alt = large.length === 0
    ? "No residual is beyond 3 standard deviations."
    : `${count(large.length, "residual")} beyond 3 standard deviations: ${largeInWords(large)}. In ${count(result.standardised.n, "normal residual")} about ${figure(0.0027 * result.standardised.n, 1)} would be.`;
  return residualChart("Residuals in time, the large ones named", alt, result.standardised, width);
}

function acfPart(result: Diagnostics): ChartPart {
  const lags = result.acf.length - 1;
  const outside = result.outside.acf;
  const chance = (1 - result.level) * lags;
  const which = outside.length === 0 ? "No autocorrelation of the residuals is" : outside.length === 1 ? `The residuals' autocorrelation at lag ${outside[0]} is` : `The residuals' autocorrelations at lags ${lagsInWords(outside)} are`;
  const alt = `${which} outside the ${percent(result.level)} band; about ${figure(chance, 2)} of ${lags} would be by chance.`;
  return lagChart({
    title: "Autocorrelations of the residuals, lag by lag", alt, season: result.seasonLength ?? 0,
    panels: [{ title: "autocorrelation", from: 1, values: result.acf.slice(1), band: Float64Array.from({ length: lags }, () => result.band) }],
  });
}

function quantilePart(result: Diagnostics): ChartPart {
  const { theoretical, sample, low, high, outside } = result.qq;
  const alt = outside === 0
    ? `All residuals lie inside the ${percent(result.level)} band that a normal sample as a whole would keep to.`
    : `${count(outside, "residual")} of ${result.n} ${outside === 1 ? "lies" : "lie"} outside the ${percent(result.level)} band that a normal sample as a whole would keep to.`;
  return quantileChart("Residuals against a normal distribution", alt, { theoretical, sample, low, high });
}

function rhythmPart(result: Diagnostics, width: number): readonly ChartPart[] {
  const { frequency, cumulative, limit, sentence } = result.cumulativePeriodogram;
  if (frequency === undefined || cumulative === undefined || limit === undefined) return [];
  const line = Array.from(frequency, (_, j) => (j + 1) / frequency.length);
  return [pathChart({
    width,
    title: "Share of the residuals' variation at slower frequencies", alt: sentence ?? "The running share of variation by frequency.", axis: "running share of variation",
    xField: { type: "quantitative", title: "frequency (cycles a period)", scale: { nice: false, zero: true }, axis: { grid: false } },
    path: { x: frequency, value: cumulative, low: line.map(at => Math.max(0, at - limit)), high: line.map(at => Math.min(1, at + limit)) },
  })];
}

function levelPart(result: Diagnostics, width: number): readonly ChartPart[] {
  const { path, limit, sentence } = result.cusum;
  const residuals = result.standardised;
  if (path === undefined || limit === undefined || path.length !== residuals.n) return [];
  return [pathChart({
    width,
    title: "Running sum of the residuals", alt: sentence ?? "The running sum of the residuals with its limits.", axis: "running sum (σ√n)", xField: timeField("x", residuals.every !== null),
    path: { x: timesMs(residuals), value: path, low: Array.from(path, () => -limit), high: Array.from(path, () => limit) },
  })];
}

/** What the regressors are called when they are proposed. */
const names: Readonly<Record<OutlierType, string>> = { additive: "event", levelShift: "level", temporaryChange: "change", innovational: "shock" };

function outlierParts(result: Diagnostics): readonly Part[] {
  const { found } = result.outliers;
  if (found.length === 0) return [{ part: "text", text: result.outliers.sentence }];
  const counts = new Map<string, number>(), entries = found.flatMap(one => {
    if (one.regressor === null) return [];
    const word = names[one.type], nth = (counts.get(word) ?? 0) + 1;
    counts.set(word, nth);
    return [`${word}${nth}: ${one.regressor}`];
  });
  return [
    { part: "text", text: result.outliers.sentence },
    {
      part: "table", title: "Single events that stand out",
      columns: [{ title: "period" }, { title: "kind" }, { title: "size on the modelled scale", align: "right", format: "+,.3~r" }, { title: "t", align: "right", format: "+.1f" }, { title: "regressor to try" }],
      rows: found.map(one => [one.time, one.words, one.size, one.t, one.regressor ?? "none"]),
      note: "By the search of Chen and Liu (1993). Add a regressor only where something is known to have happened.",
    },
    ...(entries.length === 0 ? [] : [{ part: "text" as const, tone: "note" as const, text: `All of them as an option of the fit, for copying: regressors: {${entries.join(", ")}}` }]),
  ];
}
