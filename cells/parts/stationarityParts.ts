// What the stationarity tests show: what they say together, each null hypothesis in words, the statistics on one line,
// and what differencing would change.

import { rejects, timesMs, type LambdaProfile, type RangeMean, type Series, type Stationarity, type Test } from "../../stdlib/index.ts";
import { panelChart } from "./panelChart.ts";
import { details } from "./part.ts";
import type { Part, TablePart, TextPart } from "./part.ts";
import { ratioChart, type RatioRow } from "./ratioChart.ts";
import { spreadChart } from "./spreadChart.ts";
import { figure, listOf, percent, pText } from "./words.ts";

type Shown = Stationarity & { readonly of: string; readonly axis: string; readonly series: Series; readonly lambda: { readonly guerrero: LambdaProfile; readonly likelihood: LambdaProfile } | null; readonly rangeMean: RangeMean | null };

/** Pictures of differences beyond these are in the table only. */
const mostPanels = 6;

interface NamedTest { readonly name: string; readonly test: Test }

export function stationarityParts(result: Shown, width: number): readonly Part[] {
  const tests = testsOf(result), answered = tests.filter(({ test }) => test.status !== "unavailable");
  return [
    { part: "text", text: result.together, ...(answered.length === 0 ? { tone: "caution" as const } : {}) },
    ...(answered.length === 0 ? [] : [ratioPart(answered, result.level)]),
    ...strengthText(result),
    ...details([...(answered.length === 0 ? [] : [testTable(tests, result.level)]), ...differenceParts(result, width), ...spreadParts(result)]),
    ...notesOf(result, tests),
  ];
}

function strengthText(result: Shown): readonly TextPart[] {
  return result.strength === null ? [] : [{ part: "text", text: result.strength.sentence }];
}

/** Whether the spread follows the level, and which power would even it out. */
function spreadParts(result: Shown): readonly Part[] {
  if (result.rangeMean === null || result.lambda === null || result.rangeMean.mean.length < 3) return [];
  const said = [result.rangeMean.sentence, ...[result.lambda.guerrero, result.lambda.likelihood].filter(one => one.status === "ok").map(one => one.sentence)];
  return [{ part: "text", text: said.join(" ") }, spreadChart(result.rangeMean, result.series.unit)];
}

function testsOf(result: Shown): readonly NamedTest[] {
  const named: readonly (readonly [string, Test | null | undefined])[] = [
    ["Dickey-Fuller (ADF)", result.adf], ["Phillips-Perron", result.phillipsPerron], ["DF-GLS", result.dfGls], ["KPSS", result.kpss], ["Canova-Hansen", result.seasonal],
  ];
  return named.flatMap(([name, test]) => test === null || test === undefined ? [] : [{ name, test }]);
}

function ratioPart(tests: readonly NamedTest[], level: number): Part {
  const alpha = percent(1 - level);
  // The scale is that of the level asked for, where every test prints a critical value there.
  const base = tests.every(({ test }) => test.critical?.[alpha] !== undefined) ? alpha : "5%";
  const rows: RatioRow[] = tests.flatMap(({ name, test }) => test.critical === null ? [] : [{ label: name, statistic: test.statistic, critical: test.critical, rejects: rejects(test, 1 - level) === true }]);
  const beyond = rows.filter(row => row.rejects).map(row => row.label);
  const found = beyond.length === 0 ? "no test rejects its null hypothesis" : `${listOf(beyond)} ${beyond.length === 1 ? "rejects its null hypothesis" : "reject their null hypotheses"}`;
  return ratioChart("Each statistic against its critical values at 10%, 5% and 1%", `At the ${alpha} level ${found}; right of 1 a statistic is beyond its ${base} critical value.`, rows, base);
}

function testTable(tests: readonly NamedTest[], level: number): TablePart {
  return {
    part: "table", title: "Test by test",
    columns: [{ title: "test" }, { title: "null hypothesis" }, { title: "statistic", align: "right", format: ".3f" }, { title: "p", align: "right" }, { title: "critical at 10%, 5%, 1%" }, { title: "lags, and how chosen" }, { title: `reading at ${percent(1 - level)}` }],
    rows: tests.map(({ name, test }) => [
      name, test.nullHypothesis, test.statistic, test.status === "unavailable" ? "–" : pText(test.p, test.bound).replace(/^p (= )?/, ""),
      criticalText(test), test.lags === undefined ? "" : `${test.lags}${test.lagRule ? `, ${test.lagRule}` : ""}`, reading(test, level),
    ]),
    note: "Small p speaks against the null hypothesis in its row: a unit root for the first three, stationarity for KPSS, a season that stays for Canova-Hansen. A null hypothesis that is not rejected is not thereby shown to be true.",
  };
}

function criticalText(test: Test): string {
  const values = ["10%", "5%", "1%"].map(level => test.critical?.[level]);
  return values.every(value => value === undefined) ? "–" : values.map(value => value === undefined ? "–" : figure(value, 3)).join(", ");
}

function reading(test: Test, level: number): string {
  if (test.status === "unavailable" || Number.isNaN(test.p)) return `cannot be said: ${test.note ?? "no p-value"}`;
  const rejected = rejects(test, 1 - level);
  return rejected === null ? "cannot be said: the printed table ends before this level" : rejected ? "rejected" : "not rejected";
}

function notesOf(result: Shown, tests: readonly NamedTest[]): readonly TextPart[] {
  const own = tests.filter(({ test }) => test.note !== undefined && test.status !== "unavailable").map(({ name, test }) => `${name}: ${test.note}.`);
  return [...result.notes, ...own.filter(text => !result.notes.some(note => text.endsWith(note)))].map(text => ({ part: "text", tone: "note", text }));
}

/** Differences tried side by side: the picture, the figures, and which shows the sign of one too many. */
function differenceParts(result: Shown, width: number): readonly Part[] {
  const rows = result.differences;
  if (rows.length === 0) return [];
  const least = rows.reduce((best, row, i) => row.variance < rows[best].variance ? i : best, 0);
  const ms = timesMs(result.series);
  return [
    { part: "text", text: result.differencesSentence },
    panelChart({
      title: "Differences side by side", alt: result.differencesSentence, dated: result.series.every !== null, width,
      panels: rows.slice(0, mostPanels).map(row => ({ title: row.lags.length === 0 ? `${result.axis}, undifferenced` : row.words, time: ms.slice(ms.length - row.values.length), value: row.values })),
    }),
    {
      part: "table", title: "What differencing would change",
      columns: [
        { title: "differences at lags" }, { title: "variance", align: "right", format: ",.3~r" }, { title: "autocorrelation at lag 1", align: "right", format: ".2f" },
        { title: "ADF, a unit root", align: "right" }, { title: "KPSS, stationary", align: "right" }, { title: "one too many?" },
      ],
      rows: rows.map(row => [row.label, row.variance, row.lag1, testText(row.adf), testText(row.kpss), row.overDifferenced ?? "no sign"]),
      marked: [{ row: least, word: "least variance" }],
      note: "p-values of the tests of each differenced series; the column names the null hypothesis.",
    },
  ];
}

function testText(test: Test): string {
  return test.status === "unavailable" ? "–" : pText(test.p, test.bound);
}
