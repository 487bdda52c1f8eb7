// What a forecast shows: the next period and the whole span in a sentence, the fan, the figures, the totals, the assumptions.

import type { Forecast } from "../../stdlib/index.ts";
import type { Part, TablePart, TextPart } from "./part.ts";
import { fanChart } from "./fanChart.ts";
import { pattern } from "./format.ts";
import { scenarioParts } from "./scenarioParts.ts";
import { chance, figure, percent } from "./words.ts";

/** Rows of the printed table; longer horizons are in the chart's data. */
const mostRows = 60;

export function forecastParts(forecast: Forecast): readonly Part[] {
  const several = Object.keys(forecast.scenarios).length > 0, sentence = several ? "" : findings(forecast);
  const past = Math.max(24, 4 * forecast.horizon);
  return [
    ...(several ? [] : [{ part: "text" as const, text: sentence }]),
    ...forecast.notes.filter(note => note.tone === "caution").map((note): TextPart => ({ part: "text", tone: "caution", text: note.text })),
    ...(several ? scenarioParts(forecast, past) : [fanChart(forecast, sentence, past), ...(forecast.totals.length > 0 ? [totalsTable(forecast)] : []), ...passingParts(forecast), periodsTable(forecast)]),
    ...forecast.notes.filter(note => note.tone !== "caution").map((note): TextPart => ({ part: "text", tone: "note", text: note.text })),
    { part: "text", tone: "note", text: "A forecast is a calculation from the past, and no advice." },
  ];
}

function findings(forecast: Forecast): string {
  const { median, mean, times, horizon, unit } = forecast;
  const wide = forecast.bands.reduce<Forecast["bands"][number] | null>((most, band) => most === null || band.level > most.level ? band : most, null);
  const units = unit ? ` ${unit}` : "";
  const say = (i: number): string => `${figure(median[i], 4)}${units}${wide === null ? "" : ` (${percent(wide.level)} band ${figure(wide.low[i], 4)} to ${figure(wide.high[i], 4)})`}`;
  const last = horizon - 1;
  const first = `From ${forecast.origin}, ${forecast.label} forecasts ${forecast.name} at ${say(0)} in ${times[0]}`;
  const later = last === 0 ? "." : `, and ${say(last)} in ${times[last]}.`;
  const differ = Math.abs(mean[last] / median[last] - 1) > 0.002 ? " The median is quoted; the mean lies above it because the band is lopsided." : "";
  const skew = mean[last] < median[last] ? differ.replace("above", "below") : differ;
  return first + later + skew + heldOutSentence(forecast, wide);
}

/** How what came after compares, where it is known. */
function heldOutSentence(forecast: Forecast, wide: Forecast["bands"][number] | null): string {
  const later = forecast.heldOut;
  if (later === null || wide === null) return "";
  const n = Math.min(later.n, forecast.horizon);
  let known = 0, inside = 0, error = 0;
  for (let i = 0; i < n; i++) {
    const value = later.values[i];
    if (Number.isNaN(value)) continue;
    known++;
    error += Math.abs(value - forecast.median[i]);
    if (value >= wide.low[i] && value <= wide.high[i]) inside++;
  }
  if (known === 0) return "";
  return ` Of ${known} later period${known === 1 ? "" : "s"} that ${known === 1 ? "is" : "are"} known, ${inside} fell inside the ${percent(wide.level)} band; the median missed by ${figure(error / known)} on average.`;
}

/** The chance of lying above each threshold, in a sentence and by period. */
function passingParts(forecast: Forecast): readonly Part[] {
  if (forecast.passing.length === 0) return [];
  const unit = forecast.unit ? ` ${forecast.unit}` : "";
  const sentences = forecast.passing.map(one => {
    const top = one.above.indexOf(one.above.reduce((most, p) => Math.max(most, p), 0));
    if (forecast.horizon === 1) return `The probability that ${forecast.name} passes ${figure(one.threshold, 4)}${unit} in ${forecast.times[0]} is ${chance(one.ever)}.`;
    return `The probability that ${forecast.name} passes ${figure(one.threshold, 4)}${unit} in at least one of the ${forecast.horizon} periods is ${chance(one.ever)}; for a single period it is highest in ${forecast.times[Math.max(0, top)]}, ${chance(one.above[Math.max(0, top)])}.`;
  });
  const shown = Math.min(forecast.horizon, mostRows);
  return [
    { part: "text", text: sentences.join(" ") },
    {
      part: "table", title: "Probability of lying above",
      columns: [{ title: "period" }, ...forecast.passing.map(one => ({ title: `${figure(one.threshold, 4)}${unit}`, align: "right" as const, format: ".1%" }))],
      rows: Array.from({ length: shown }, (_, i) => [forecast.times[i], ...forecast.passing.map(one => one.above[i])]),
    },
  ];
}

function periodsTable(forecast: Forecast): TablePart {
  const shown = Math.min(forecast.horizon, mostRows);
  const bands = [...forecast.bands].sort((a, b) => a.level - b.level);
  const growth = new Map(forecast.growth.map(one => [one.time, one.median]));
  const grows = growth.size > 0;
  return {
    part: "table", title: `${forecast.name} by period`,
    columns: [
      { title: "period" }, { title: "median", align: "right", format: pattern(forecast.median), unit: forecast.unit }, { title: "mean", align: "right", format: pattern(forecast.mean), unit: forecast.unit },
      ...bands.flatMap(band => [
        { title: `${percent(band.level)} from`, align: "right" as const, format: pattern(forecast.median) },
        { title: `${percent(band.level)} to`, align: "right" as const, format: pattern(forecast.median) },
      ]),
      ...(grows ? [{ title: "on the year before", align: "right" as const, format: "+.1%" }] : []),
    ],
    rows: Array.from({ length: shown }, (_, i) => [
      forecast.times[i], forecast.median[i], forecast.mean[i], ...bands.flatMap(band => [band.low[i], band.high[i]]),
      ...(grows ? [growth.get(forecast.times[i]) ?? NaN] : []),
    ]),
    ...(forecast.horizon > shown ? { note: `The first ${shown} of ${forecast.horizon} periods; all of them are in the chart's data.` } : {}),
  };
}

function totalsTable(forecast: Forecast): TablePart {
  const levels = forecast.totals[0].bands.map(band => band.level);
  const format = pattern(forecast.totals.map(total => total.median));
  const part = forecast.totals.some(total => total.observed > 0);
  const grows = forecast.totals.some(total => total.growth !== undefined);
  return {
    part: "table", title: "Totals over spans",
    columns: [
      { title: "span" }, { title: "median", align: "right", format, unit: forecast.unit }, { title: "mean", align: "right", format, unit: forecast.unit },
      ...levels.flatMap(level => [{ title: `${percent(level)} from`, align: "right" as const, format }, { title: `${percent(level)} to`, align: "right" as const, format }]),
      ...(grows ? [{ title: "on the year before", align: "right" as const, format: "+.1%" }] : []),
      ...(part ? [{ title: "periods already observed", align: "right" as const, format: "d" }] : []),
    ],
    rows: forecast.totals.map(total => [
      total.from === total.to ? total.from : `${total.from} to ${total.to}`, total.median, total.mean,
      ...total.bands.flatMap(band => [band.low, band.high]), ...(grows ? [total.growth?.median ?? NaN] : []), ...(part ? [total.observed] : []),
    ]),
    note: "The bands of a total take account of errors that run in the same direction: they are not the sum of the periods' bands.",
  };
}
