// What a forecast under several futures of its regressors shows: their course and figures side by side, and the differences.

import type { Forecast, Scenario } from "../../stdlib/index.ts";
import { pattern } from "./format.ts";
import type { Part, TableColumn, TablePart } from "./part.ts";
import { differenceChart, scenarioChart, widest } from "./scenarioCharts.ts";
import { chance, figure, listOf, percent } from "./words.ts";

/** Rows of the printed tables; longer horizons are in the charts' data. */
const mostRows = 60;

export function scenarioParts(forecast: Forecast, shownPast: number): readonly Part[] {
  const scenarios = Object.values(forecast.scenarios), told = differencesSentence(forecast, scenarios);
  return [
    { part: "text", text: `${courseSentence(forecast, scenarios)} ${told}` },
    scenarioChart(forecast, courseSentence(forecast, scenarios), shownPast),
    ...(forecast.totals.length > 0 ? [totalsTable(forecast, scenarios)] : []),
    ...passingParts(forecast, scenarios),
    periodsTable(forecast, scenarios),
    differenceChart(forecast, told),
    differencesTable(forecast, scenarios),
  ];
}

function courseSentence({ name, unit, label, origin, times, horizon }: Forecast, scenarios: readonly Scenario[]): string {
  const last = horizon - 1, units = unit ? ` ${unit}` : "";
  return `From ${origin}, ${label} forecasts ${name} in ${times[last]} at ${listOf(scenarios.map((one) => `${figure(one.median[last], 4)}${units} in scenario ${one.label}`))} (medians).`;
}

/** Over the last total where one was asked for, else in the last period. */
function differencesSentence({ unit, times, horizon }: Forecast, scenarios: readonly Scenario[]): string {
  const units = unit ? ` ${unit}` : "";
  return scenarios.flatMap(({ label, difference }) => {
    if (difference === null) return [];
    const total = difference.totals.at(-1), at = horizon - 1;
    const { median, bands } = total ?? { median: difference.median[at], bands: difference.bands.map(({ level, low, high }) => ({ level, low: low[at], high: high[at] })) };
    const band = widest(bands), over = total === undefined ? `in ${times[at]}` : `over ${total.from === total.to ? total.from : `${total.from} to ${total.to}`}`;
    return [`Against ${difference.against}, ${label} comes to ${signed(median)}${units} ${over}${band === null ? "" : ` (${percent(band.level)} band ${signed(band.low)} to ${signed(band.high)})`}.`];
  }).join(" ");
}

const signed = (value: number): string => `${value > 0 ? "+" : ""}${figure(value, 3)}`;

/** Median and widest band of each scenario, one beside the other. */
function sideBySide(title: string, heading: string, scenarios: readonly Scenario[], unit: string, format: string, rows: readonly string[], row: (one: Scenario, i: number) => readonly number[], note?: string): TablePart {
  const band = widest(scenarios[0].bands), level = band === null ? [] : [percent(band.level)];
  const columns: TableColumn[] = [{ title: heading }, ...scenarios.flatMap(({ label }) => [
    { title: `${label}: median`, align: "right" as const, format, unit },
    ...level.flatMap((text) => [{ title: `${label}: ${text} from`, align: "right" as const, format }, { title: `${label}: ${text} to`, align: "right" as const, format }]),
  ])];
  return { part: "table", title, columns, rows: rows.map((time, i) => [time, ...scenarios.flatMap((one) => row(one, i))]), ...(note === undefined ? {} : { note }) };
}

function periodsTable({ name, unit, times, horizon }: Forecast, scenarios: readonly Scenario[]): TablePart {
  const shown = Math.min(horizon, mostRows), note = horizon > shown ? `The first ${shown} of ${horizon} periods; all of them are in the chart's data.` : undefined;
  return sideBySide(`${name} by period and scenario`, "period", scenarios, unit, pattern(scenarios[0].median), times.slice(0, shown), (one, i) => {
    const band = widest(one.bands);
    return [one.median[i], ...(band === null ? [] : [band.low[i], band.high[i]])];
  }, note);
}

function totalsTable({ unit, totals }: Forecast, scenarios: readonly Scenario[]): TablePart {
  const spans = totals.map(({ from, to }) => (from === to ? from : `${from} to ${to}`));
  return sideBySide("Totals by scenario", "span", scenarios, unit, pattern(totals.map((total) => total.median)), spans, (one, i) => {
    const band = widest(one.totals[i].bands);
    return [one.totals[i].median, ...(band === null ? [] : [band.low, band.high])];
  });
}

/** The chance of passing each threshold, scenario by scenario. */
function passingParts({ name, unit, times, horizon }: Forecast, scenarios: readonly Scenario[]): readonly Part[] {
  const units = unit ? ` ${unit}` : "", [{ passing }] = scenarios;
  if (passing.length === 0) return [];
  const sentences = passing.map(({ threshold }, k) => `The probability that ${name} passes ${figure(threshold, 4)}${units} ${horizon === 1 ? `in ${times[0]}` : `in at least one of the ${horizon} periods`} is ${listOf(scenarios.map((one) => `${chance(one.passing[k].ever)} in scenario ${one.label}`))}.`);
  const columns = scenarios.flatMap(({ label, passing: own }) => own.map(({ threshold }) => ({ title: `${label}: ${figure(threshold, 4)}${units}`, align: "right" as const, format: ".1%" })));
  return [
    { part: "text", text: sentences.join(" ") },
    { part: "table", title: "Probability of lying above, by scenario", columns: [{ title: "period" }, ...columns], rows: times.slice(0, mostRows).map((time, i) => [time, ...scenarios.flatMap((one) => one.passing.map((each) => each.above[i]))]) },
  ];
}

/** Totals first, then periods: what somebody decides on is mostly a total. */
function differencesTable({ unit, times, horizon, totals }: Forecast, scenarios: readonly Scenario[]): TablePart {
  const later = scenarios.filter((one) => one.difference !== null), shown = Math.min(horizon, mostRows);
  const spans = totals.map(({ from, to }) => `${from === to ? from : `${from} to ${to}`}, total`);
  const sizes = later.flatMap(({ difference }) => [...difference!.median, ...difference!.totals.map((total) => total.median)]);
  return sideBySide(`Difference from ${later[0].difference!.against}`, "period", later, unit, `+${pattern(sizes)}`, [...spans, ...times.slice(0, shown)], ({ difference }, row) => {
    if (row < spans.length) { const total = difference!.totals[row], band = widest(total.bands); return [total.median, ...(band === null ? [] : [band.low, band.high])]; }
    const i = row - spans.length, band = widest(difference!.bands);
    return [difference!.median[i], ...(band === null ? [] : [band.low[i], band.high[i]])];
  });
}
