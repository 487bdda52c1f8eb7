// What a fit shows: the equation with its numbers, the coefficients against zero, the roots, and what is doubtful.

import { normalQuantile, slice, type Fit } from "../../stdlib/index.ts";
import { timePlot, type Line } from "./chart.ts";
import { details } from "./part.ts";
import type { Part, TablePart, TextPart } from "./part.ts";
import { backshiftEquation, legend, writtenOutEquation } from "./equation.ts";
import { intervalChart, type IntervalRow } from "./intervalChart.ts";
import { rootsChart } from "./rootsChart.ts";
import { axisTitle, differenceLags, scaleText } from "./scale.ts";
import { capital, count, decimals, figure, listOf, percent } from "./words.ts";

/** One coefficient of a model, as a reader meets it. */
export interface Coefficient {
  readonly label: string;
  readonly group: "lags" | "level" | "regressor";
  readonly value: number; readonly se: number; readonly seRobust: number;
  readonly held: boolean;
}

const level = 0.95;

export function fitParts(fit: Fit, width: number): readonly Part[] {
  const coefficients = coefficientsOf(fit);
  return [
    { part: "text", text: openingSentence(fit) },
    ...cautions(fit),
    backshiftEquation(fit, width),
    writtenOutEquation(fit, width),
    { part: "text", tone: "note", text: `Here ${legend(fit)}.` },
    ...intervalCharts(coefficients),
    usedSentence(fit),
    ...details([...(coefficients.length > 0 ? [coefficientTable(coefficients, fit)] : []), ...rootParts(fit, width), ...usedChart(fit, width)]),
    {
      part: "figures", figures: [
        { label: "log-likelihood", value: fit.logLikelihood, format: ",.2f" },
        { label: "AICc", value: fit.aicc, format: ",.2f" }, { label: "AIC", value: fit.aic, format: ",.2f" }, { label: "BIC", value: fit.bic, format: ",.2f" },
        { label: "typical one-step error", value: Math.sqrt(fit.sigma2), format: ",.4~r" },
        { label: "free parameters", value: fit.k, format: "d" }, { label: "observations", value: fit.n, format: ",d" },
      ],
    },
  ];
}

function openingSentence(fit: Fit): string {
  const how = {
    exact: "exact maximum likelihood", restricted: "restricted maximum likelihood", conditional: "the conditional sum of squares", yuleWalker: "the Yule-Walker equations",
    burg: "Burg's recursion", leastSquares: "least squares",
  }[fit.method];
  const loose = coefficientsOf(fit).filter(c => c.group === "lags" && !c.held && Number.isFinite(c.se) && Math.abs(c.value) < normalQuantile(0.975) * c.se);
  const doubt = loose.length === 0 ? "" : ` ${capital(listOf(loose.map(c => c.label)))} ${loose.length === 1 ? "is" : "are"} not told apart from zero at ${percent(level)}: a smaller model may do as well.`;
  return `${fit.label} describes ${scaleText(fit.series)}, estimated by ${how}; a one-step error is typically ${figure(Math.sqrt(fit.sigma2))} on that scale.${relativeError(fit)}${doubt}`;
}

/** On a log scale a small standard deviation is a share of the level. */
function relativeError(fit: Fit): string {
  const sd = Math.sqrt(fit.sigma2);
  const logs = fit.series.steps.some(step => step.step === "log");
  return logs && sd < 0.5 ? ` In the units of the data that is about ${percent(sd)} of the level.` : "";
}

function cautions(fit: Fit): readonly TextPart[] {
  // How many values are missing stands in the sentence about the observations.
  const parts: TextPart[] = fit.notes.filter(note => note.code !== "gaps").map(note => ({ part: "text", tone: note.tone, text: note.text }));
  if (!fit.converged && !fit.notes.some(note => /converg/i.test(note.text))) {
    parts.unshift({ part: "text", tone: "caution", text: "The search for the best coefficients did not settle: take these figures as provisional, and try a smaller model." });
  }
  return parts;
}

/** The free and held coefficients of a fit, in the order of its equation. */
export function coefficientsOf(fit: Fit): readonly Coefficient[] {
  const hold = fit.options.hold ?? {};
  const list: Coefficient[] = [];
  const side = (values: Float64Array, se: Float64Array, robust: Float64Array, held: readonly unknown[] | undefined, label: (i: number) => string): void => {
    values.forEach((value, i) => {
      const isHeld = typeof held?.[i] === "number";
      // A lag left out of a list of lags is no coefficient of the model.
      if (value === 0 && !Number.isFinite(se[i]) && !isHeld) return;
      list.push({ label: label(i), group: "lags", value, se: se[i], seRobust: robust[i], held: isHeld });
    });
  };
  const { se, seRobust, seasonLength: s } = fit;
  side(fit.phi, se.phi, seRobust.phi, hold.phi, i => `AR lag ${i + 1}`);
  side(fit.theta, se.theta, seRobust.theta, hold.theta, i => `MA lag ${i + 1}`);
  side(fit.seasonalPhi, se.seasonalPhi, seRobust.seasonalPhi, hold.seasonalPhi, i => `seasonal AR lag ${(i + 1) * s}`);
  side(fit.seasonalTheta, se.seasonalTheta, seRobust.seasonalTheta, hold.seasonalTheta, i => `seasonal MA lag ${(i + 1) * s}`);
  const meanHeld = typeof hold.mean === "number";
  if (fit.mean !== 0 || Number.isFinite(se.mean) || meanHeld) {
    list.push({ label: differenced(fit) ? "drift a period" : "mean", group: "level", value: fit.mean, se: se.mean, seRobust: seRobust.mean, held: meanHeld });
  }
  for (const [name, value] of Object.entries(fit.beta)) {
    list.push({ label: name, group: "regressor", value, se: se.beta[name], seRobust: seRobust.beta[name], held: typeof hold.beta?.[name] === "number" });
  }
  return list;
}

function differenced(fit: Fit): boolean { return fit.series.steps.some(step => step.step === "difference"); }

function intervalCharts(coefficients: readonly Coefficient[]): readonly Part[] {
  if (coefficients.length === 0) return [{ part: "text", text: "The model has no coefficients besides the variance of its shocks." }];
  const lags = coefficients.filter(c => c.group === "lags");
  const regressors = coefficients.filter(c => c.group === "regressor");
  const charts: Part[] = [];
  if (lags.length > 0) charts.push(intervalChart("Lag coefficients against zero", altOf(lags), "coefficient ± standard error, with its 95% interval", lags.map(intervalRow)));
  if (regressors.length > 1) charts.push(intervalChart("Effects of the regressors", altOf(regressors), "effect on the modelled scale ± standard error, with its 95% interval", regressors.map(intervalRow)));
  return charts;
}

function limits(c: Coefficient): { low: number; high: number } {
  const z = normalQuantile((1 + level) / 2);
  return { low: c.value - z * c.se, high: c.value + z * c.se };
}

function intervalRow(c: Coefficient): IntervalRow {
  if (c.held) return { label: c.label, value: c.value, low: NaN, high: NaN, remark: "(held)" };
  if (!Number.isFinite(c.se)) return { label: c.label, value: c.value, low: NaN, high: NaN, remark: "(no interval)" };
  return { label: c.label, value: c.value, se: c.se, ...limits(c) };
}

function altOf(coefficients: readonly Coefficient[]): string {
  return coefficients.map(c => {
    if (c.held) return `${c.label} held at ${figure(c.value)}`;
    if (!Number.isFinite(c.se)) return `${c.label} ${figure(c.value)}, no interval available`;
    const { low, high } = limits(c);
    return `${c.label} ${figure(c.value)}, between ${figure(low, 2)} and ${figure(high, 2)}${low <= 0 && high >= 0 ? ", zero not excluded" : ""}`;
  }).join("; ") + ".";
}

function coefficientTable(coefficients: readonly Coefficient[], fit: Fit): TablePart {
  const robust = coefficients.some(c => Number.isFinite(c.seRobust));
  return {
    part: "table", title: "What was estimated, and how closely",
    columns: [
      { title: "coefficient" }, { title: "value", align: "right", format: ",.4~r" },
      { title: "from", align: "right", format: ",.3~r" }, { title: "to", align: "right", format: ",.3~r" },
      { title: "give or take", align: "right", format: ",.3~r" },
      ...(robust ? [{ title: "the same, robust", align: "right" as const, format: ",.3~r" }] : []),
      { title: "reading" },
    ],
    rows: coefficients.map(c => {
      const { low, high } = c.held ? { low: NaN, high: NaN } : limits(c);
      return [c.label, c.value, low, high, c.held ? NaN : c.se, ...(robust ? [c.held ? NaN : c.seRobust] : []), reading(c, low, high)];
    }).concat(fit.mean === 0 ? [] : [["constant of the equation", fit.constant, NaN, NaN, NaN, ...(robust ? [NaN] : []), `the ${differenced(fit) ? "drift" : "mean"} times (1 − Σφ)(1 − ΣΦ)`]]),
    note: `From and to are the ${percent(level)} interval; give or take is one standard error${robust ? ", by the information matrix and by the sandwich form that stands when the shocks are not Gaussian" : ""}.`,
  };
}

function reading(c: Coefficient, low: number, high: number): string {
  if (c.held) return "held at this value";
  if (!Number.isFinite(c.se)) return "no interval: see the remarks above";
  if (low > 0) return "above zero";
  if (high < 0) return "below zero";
  return "zero is within reach";
}

function rootParts(fit: Fit, width: number): readonly Part[] {
  if (fit.roots.ar.length + fit.roots.ma.length === 0) return [];
  const alt = rootsSentence(fit);
  return [
    rootsChart(fit.roots, alt, fit.seasonLength, width), { part: "text", text: alt },
    { part: "text", tone: "note", text: "Of each mirrored pair of roots one is drawn. The nearer the rim, the longer it is remembered; the angle is a cycle, whose length in periods stands around the rim." },
  ];
}

function rootsSentence(fit: Fit): string {
  const say = (roots: Fit["roots"]["ar"], name: string, consequence: string): string => {
    if (roots.length === 0) return "";
    const nearest = Math.min(...roots.map(root => root.modulus));
    const place = nearest < 1 - 1e-8 ? "lies outside the circle (its root is inside)" : nearest < 1.001 ? "lies on the circle" : "lies inside";
    return `The ${name} inverse root nearest the unit circle ${place}, at distance ${decimals(1 / nearest, 3)} from the middle${nearest >= 1.001 ? `: ${consequence}` : ""}.`;
  };
  return [
    say(fit.roots.ar, "autoregressive", "the model is stationary"),
    say(fit.roots.ma, "moving-average", "the shocks can be recovered from the data"),
  ].filter(text => text !== "").join(" ");
}

/** The window on the series it was cut from, where something was held out. */
function usedChart(fit: Fit, width: number): readonly Part[] {
  const given = fit.options.series, { series } = fit;
  const first = given.times.indexOf(series.times[0]), last = given.times.indexOf(series.times[series.n - 1]);
  if (first < 0 || last < 0 || (first === 0 && last === given.n - 1)) return [];
  const lines: Line[] = [{ label: "used", series, style: "sample" }];
  if (last < given.n - 1) lines.push({ label: "held out", series: slice(given, last + 1, given.n), style: "heldOut" });
  if (first > 0) lines.push({ label: "before the window", series: slice(given, 0, first), style: "heldOut" });
  return [timePlot({
    title: "Observations used", alt: `Used are ${series.times[0]} to ${series.times[series.n - 1]} of ${given.times[0]} to ${given.times[given.n - 1]}.`,
    axis: axisTitle(series), lines, width, height: 120,
  })];
}

function usedSentence(fit: Fit): TextPart {
  const { series } = fit;
  const lost = differenceLags(series.steps).reduce((sum, lag) => sum + lag, 0);
  const gaps = Array.from(series.values).filter(Number.isNaN).length;
  const given = fit.options.series;
  const lastUsed = series.times[series.n - 1];
  const held = given.n > 0 && given.times[given.n - 1] !== lastUsed ? given.n - 1 - given.times.indexOf(lastUsed) : 0;
  return {
    part: "text", tone: "note",
    text: `It rests on ${count(fit.n, "observation")}, ${series.times[0]} to ${lastUsed}`
      + `${lost > 0 ? `; the differences used up the first ${count(lost, "period")}` : ""}`
      + `${gaps > 0 ? `; ${count(gaps, "period")} without an observation ${gaps === 1 ? "was" : "were"} left as missing, not filled` : ""}`
      + `${held > 0 ? `; ${count(held, "later period")} ${held === 1 ? "is" : "are"} held out` : ""}.`,
  };
}
