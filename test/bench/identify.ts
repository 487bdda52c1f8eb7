// Size and power of every identification and diagnostic test, simulated with seeds, beside its published critical value.
// 5,000 replications each: the standard error of a simulated size of 5% is 0.3 points.

import { fit } from "../../stdlib/arma/fit.ts";
import { ccf } from "../../stdlib/correlogram/acf.ts";
import { autocovariance } from "../../stdlib/correlogram/autocovariance.ts";
import { extendedAcf, smallestCanonical, type OrderTable } from "../../stdlib/correlogram/extendedAcf.ts";
import { prewhitenedCcf } from "../../stdlib/correlogram/prewhitenedCcf.ts";
import { cusum, largestBreak } from "../../stdlib/diagnostics/breaks.ts";
import { archLM, mcleodLi } from "../../stdlib/diagnostics/changingVariance.ts";
import { cumulativePeriodogram } from "../../stdlib/diagnostics/cumulativePeriodogram.ts";
import { jarqueBera } from "../../stdlib/diagnostics/jarqueBera.ts";
import { outliers } from "../../stdlib/diagnostics/outliers.ts";
import { boxPierce, ljungBox, monti } from "../../stdlib/diagnostics/portmanteau.ts";
import type { Test } from "../../stdlib/diagnostics/test.ts";
import { normals, seeded } from "../../stdlib/forecast/random.ts";
import { makeSeries } from "../../stdlib/series/series.ts";
import { adf } from "../../stdlib/unitroot/adf.ts";
import { canovaHansen } from "../../stdlib/unitroot/canovaHansen.ts";
import { dfGls } from "../../stdlib/unitroot/dfGls.ts";
import { kpss } from "../../stdlib/unitroot/kpss.ts";
import { phillipsPerron } from "../../stdlib/unitroot/phillipsPerron.ts";

type Draw = () => number;
type Process = (n: number, draw: Draw) => Float64Array;

/** One line of the table: a test, the published 5% point of its statistic, the null process and one alternative. */
interface Plan {
  readonly name: string;
  readonly n: number;
  readonly test: (x: Float64Array) => Test;
  readonly published: number; readonly source: string;
  /** Where it rejects. */
  readonly tail: "low" | "high";
  readonly null: Process;
  readonly alternative: Process; readonly alternativeWords: string;
}

/** An autoregression of order one around zero; coefficient 1 is a random walk from 0. */
const autoregression = (phi: number, slope = 0): Process => (n, draw) => {
  let u = phi === 1 ? 0 : draw() / Math.sqrt(1 - phi * phi);
  return Float64Array.from({ length: n }, (_, t) => { u = phi * u + draw(); return u + slope * t; });
};
const noise: Process = (n, draw) => Float64Array.from({ length: n }, draw);
const walk = autoregression(1);
const movingAverage = (theta: number): Process => (n, draw) => { let e = draw(); return Float64Array.from({ length: n }, () => { const now = draw(), v = now + theta * e; e = now; return v; }); };
const changing: Process = (n, draw) => { let e = 0; return Float64Array.from({ length: n }, () => { e = Math.sqrt(0.5 + 0.5 * e * e) * draw(); return e; }); };
const broken = (size: number): Process => (n, draw) => Float64Array.from({ length: n }, (_, t) => draw() + (t >= n / 2 ? size : 0));
const heavy: Process = (n, draw) => Float64Array.from({ length: n }, () => draw() / Math.sqrt((draw() ** 2 + draw() ** 2 + draw() ** 2 + draw() ** 2 + draw() ** 2) / 5));
const stableSeason = (length: number): Process => (n, draw) => { const x = noise(n, draw); return x.map((v, t) => v + 2 * Math.cos((2 * Math.PI * t) / length)); };
/** A random walk of the level with a season that stays: what the seasonal test meets after a first difference. */
const walkWithSeason = (length: number): Process => (n, draw) => walk(n, draw).map((v, t) => v + 2 * Math.cos((2 * Math.PI * t) / length));
const mixed = (phi: readonly number[], theta: readonly number[]): Process => (n, draw) => {
  const from = 100, e = Float64Array.from({ length: n + from }, draw), x = new Float64Array(n + from);
  for (let t = 0; t < x.length; t++) {
    x[t] = e[t];
    phi.forEach((c, i) => { if (t > i) x[t] += c * x[t - 1 - i]; });
    theta.forEach((c, i) => { if (t > i) x[t] += c * e[t - 1 - i]; });
  }
  return x.slice(from);
};
const wanderingSeason = (length: number): Process => (n, draw) => { const x = new Float64Array(n + length); for (let t = length; t < x.length; t++) x[t] = x[t - length] + draw(); return x.slice(length); };

const plans: readonly Plan[] = [
  ...[50, 100, 250].map((n): Plan => ({ name: "ADF, constant, 0 lags", n, test: (x) => adf(x, { lags: 0 }), published: { 50: -2.921, 100: -2.891, 250: -2.873 }[n] as number, source: "MacKinnon 2010", tail: "low", null: walk, alternative: autoregression(0.9), alternativeWords: "AR(1) 0.9" })),
  { name: "ADF, constant, AIC lags", n: 100, test: (x) => adf(x), published: -2.891, source: "MacKinnon 2010", tail: "low", null: walk, alternative: autoregression(0.9), alternativeWords: "AR(1) 0.9" },
  { name: "ADF, trend, 0 lags", n: 100, test: (x) => adf(x, { trend: "linear", lags: 0 }), published: -3.455, source: "MacKinnon 2010", tail: "low", null: walk, alternative: autoregression(0.8, 0.05), alternativeWords: "AR(1) 0.8 on a trend" },
  { name: "Phillips-Perron, constant", n: 100, test: (x) => phillipsPerron(x), published: -2.891, source: "MacKinnon 2010", tail: "low", null: walk, alternative: autoregression(0.9), alternativeWords: "AR(1) 0.9" },
  { name: "Phillips-Perron, trend", n: 100, test: (x) => phillipsPerron(x, { trend: "linear" }), published: -3.455, source: "MacKinnon 2010", tail: "low", null: walk, alternative: autoregression(0.8, 0.05), alternativeWords: "AR(1) 0.8 on a trend" },
  { name: "DF-GLS, constant, BIC lags", n: 100, test: (x) => dfGls(x), published: -1.944, source: "MacKinnon 2010, asymptotic law", tail: "low", null: walk, alternative: autoregression(0.9), alternativeWords: "AR(1) 0.9" },
  { name: "DF-GLS, constant, 0 lags", n: 100, test: (x) => dfGls(x, { lags: 0 }), published: -1.944, source: "MacKinnon 2010, asymptotic law", tail: "low", null: walk, alternative: autoregression(0.9), alternativeWords: "AR(1) 0.9" },
  ...[50, 100, 200].map((n): Plan => ({ name: "DF-GLS, trend, 0 lags", n, test: (x) => dfGls(x, { trend: "linear", lags: 0 }), published: { 50: -3.19, 100: -3.03, 200: -2.93 }[n] as number, source: "Elliott et al. 1996, table I", tail: "low", null: walk, alternative: autoregression(0.8, 0.05), alternativeWords: "AR(1) 0.8 on a trend" })),
  { name: "KPSS, constant, 0 lags", n: 100, test: (x) => kpss(x, { bandwidth: 0 }), published: 0.463, source: "Kwiatkowski et al. 1992, table 1", tail: "high", null: noise, alternative: walk, alternativeWords: "random walk" },
  { name: "KPSS, trend, 0 lags", n: 100, test: (x) => kpss(x, { trend: "linear", bandwidth: 0 }), published: 0.146, source: "Kwiatkowski et al. 1992, table 1", tail: "high", null: noise, alternative: walk, alternativeWords: "random walk" },
  { name: "KPSS, constant, short rule", n: 100, test: (x) => kpss(x), published: 0.463, source: "Kwiatkowski et al. 1992, table 1", tail: "high", null: noise, alternative: walk, alternativeWords: "random walk" },
  { name: "Canova-Hansen, quarters", n: 160, test: (x) => canovaHansen(x, { length: 4, difference: false, bandwidth: 0, critical: false }), published: 1.01, source: "Canova & Hansen 1995, table 1", tail: "high", null: stableSeason(4), alternative: wanderingSeason(4), alternativeWords: "seasonal walk" },
  { name: "Canova-Hansen, months", n: 240, test: (x) => canovaHansen(x, { length: 12, difference: false, bandwidth: 0, critical: false }), published: 2.75, source: "Canova & Hansen 1995, table 1", tail: "high", null: stableSeason(12), alternative: wanderingSeason(12), alternativeWords: "seasonal walk" },
  { name: "Canova-Hansen, as it is run", n: 160, test: (x) => canovaHansen(x, { length: 4, critical: false }), published: 1.01, source: "Canova & Hansen 1995, table 1", tail: "high", null: walkWithSeason(4), alternative: wanderingSeason(4), alternativeWords: "seasonal walk" },
  { name: "Ljung-Box, lag 10", n: 100, test: (x) => ljungBox(x, 10), published: 18.307, source: "chi-square, 10 df", tail: "high", null: noise, alternative: autoregression(0.3), alternativeWords: "AR(1) 0.3" },
  { name: "Box-Pierce, lag 10", n: 100, test: (x) => boxPierce(x, 10), published: 18.307, source: "chi-square, 10 df", tail: "high", null: noise, alternative: autoregression(0.3), alternativeWords: "AR(1) 0.3" },
  { name: "Monti, lag 10", n: 100, test: (x) => monti(x, 10), published: 18.307, source: "chi-square, 10 df", tail: "high", null: noise, alternative: movingAverage(0.4), alternativeWords: "MA(1) 0.4" },
  { name: "Jarque-Bera", n: 100, test: (x) => jarqueBera(x), published: 5.991, source: "chi-square, 2 df", tail: "high", null: noise, alternative: heavy, alternativeWords: "Student t, 5 df" },
  { name: "Jarque-Bera", n: 500, test: (x) => jarqueBera(x), published: 5.991, source: "chi-square, 2 df", tail: "high", null: noise, alternative: heavy, alternativeWords: "Student t, 5 df" },
  { name: "ARCH LM, 5 lags", n: 200, test: (x) => archLM(x, 5), published: 11.07, source: "chi-square, 5 df", tail: "high", null: noise, alternative: changing, alternativeWords: "ARCH(1) 0.5" },
  { name: "McLeod-Li, lag 10", n: 200, test: (x) => mcleodLi(x, 10), published: 18.307, source: "chi-square, 10 df", tail: "high", null: noise, alternative: changing, alternativeWords: "ARCH(1) 0.5" },
  { name: "cumulative periodogram", n: 200, test: (x) => cumulativePeriodogram(x), published: 0.1333, source: "Stephens 1974", tail: "high", null: noise, alternative: autoregression(0.3), alternativeWords: "AR(1) 0.3" },
  { name: "CUSUM", n: 200, test: (x) => cusum(x), published: 1.358, source: "Brownian bridge", tail: "high", null: noise, alternative: broken(0.5), alternativeWords: "break of half a deviation" },
  { name: "largest break", n: 200, test: (x) => largestBreak(x), published: 8.68, source: "Andrews 2003", tail: "high", null: noise, alternative: broken(0.5), alternativeWords: "break of half a deviation" },
];

export function bench(print: (line: string) => void, replications = 5000): void {
  print(`${replications} replications a line; size and power at the nominal 5% by the test's own p-value.`);
  print(line(["test", "n", "5% point", "published", "size %", "power %", "against", "source"]));
  plans.forEach((plan, i) => print(row(plan, i, replications)));
  afterFit(print, replications);
  falseFinds(print, Math.max(20, Math.round(replications / 10)));
  orders(print, Math.max(20, Math.round(replications / 5)));
  crossCorrelations(print, replications);
  speed(print);
}

/** How often the tables for mixed orders suggest the right orders, and how often higher ones. */
function orders(print: (line: string) => void, replications: number): void {
  const processes: readonly (readonly [string, number, number, Process])[] = [
    ["white noise", 0, 0, noise], ["AR(1) 0.7", 1, 0, autoregression(0.7)], ["AR(2) 1.2, -0.5", 2, 0, mixed([1.2, -0.5], [])],
    ["MA(1) 0.7", 0, 1, movingAverage(0.7)], ["ARMA(1,1) 0.7, 0.6", 1, 1, mixed([0.7], [0.6])], ["ARMA(2,1) 1.2, -0.45, 0.5", 2, 1, mixed([1.2, -0.45], [0.5])],
  ];
  print(`orders suggested by the tables, ${replications} series each: right % / too high %`);
  for (const n of [100, 200, 500]) for (const [name, p, q, process] of processes) {
    const draw = normals(seeded(79)), counts = [0, 0, 0, 0];
    for (let i = 0; i < replications; i++) {
      const x = process(n, draw);
      [extendedAcf(x), smallestCanonical(x)].forEach(({ suggests }: OrderTable, k) => {
        if (suggests?.ar === p && suggests.ma === q) counts[2 * k]++;
        else if (suggests === null || suggests.ar + suggests.ma > p + q) counts[2 * k + 1]++;
      });
    }
    const [right, high, rightToo, highToo] = counts.map((c) => ((100 * c) / replications).toFixed(0));
    print(`${name.padEnd(28)}  ${String(n).padStart(4)}  extended autocorrelations ${right.padStart(3)} / ${high.padStart(2)}  smallest canonical correlations ${rightToo.padStart(3)} / ${highToo.padStart(2)}`);
  }
}

/** Cross-correlations of unrelated series outside their 95% limits, with and without prewhitening. */
function crossCorrelations(print: (line: string) => void, replications: number): void {
  const draw = normals(seeded(80)), n = 200, lags = 10;
  let white = 0, plain = 0;
  for (let i = 0; i < replications; i++) {
    const x = autoregression(0.8)(n, draw), y = autoregression(0.8)(n, draw), limit = 1.959964 / Math.sqrt(n);
    white += prewhitenedCcf(x, y, lags).outside.length;
    for (const r of [...ccf(x, y, lags), ...ccf(y, x, lags).slice(1)]) if (Math.abs(r) > limit) plain++;
  }
  const share = (count: number): string => ((100 * count) / (replications * (2 * lags + 1))).toFixed(1);
  print(`cross-correlations of unrelated AR(1) 0.8 series of ${n} outside 95% limits: ${share(white)}% after prewhitening, ${share(plain)}% without.`);
}

function row(plan: Plan, index: number, replications: number): string {
  const draw = normals(seeded(1000 + index));
  const statistics = new Float64Array(replications);
  let size = 0, power = 0;
  for (let i = 0; i < replications; i++) {
    const test = plan.test(plan.null(plan.n, draw));
    statistics[i] = test.statistic;
    if (rejects(test)) size++;
    if (rejects(plan.test(plan.alternative(plan.n, draw)))) power++;
  }
  statistics.sort();
  const point = statistics[Math.floor((plan.tail === "low" ? 0.05 : 0.95) * replications)];
  const share = (count: number): string => ((100 * count) / replications).toFixed(1);
  return line([plan.name, String(plan.n), point.toFixed(3), plan.published.toFixed(3), share(size), share(power), plan.alternativeWords, plan.source]);
}

function rejects(test: Test): boolean {
  return test.p < 0.05;
}

/** Portmanteau tests on residuals of a fit, with the degrees of freedom reduced: the null is a right model. */
function afterFit(print: (line: string) => void, replications: number): void {
  const draw = normals(seeded(77));
  const counts = [0, 0, 0], missing = [0, 0, 0];
  for (let i = 0; i < replications; i++) {
    const right = fit({ series: makeSeries({ name: "x", values: autoregression(0.6)(100, draw) }), ar: 1 });
    const wrong = fit({ series: makeSeries({ name: "x", values: movingAverage(0.7)(100, draw) }), ar: 1 });
    [ljungBox, boxPierce, monti].forEach((test, k) => {
      if (rejects(test(right, 10))) counts[k]++;
      if (rejects(test(wrong, 10))) missing[k]++;
    });
  }
  ["Ljung-Box", "Box-Pierce", "Monti"].forEach((name, k) => print(line([`${name}(10) of an AR(1) fit`, "100", "", "16.919", ((100 * counts[k]) / replications).toFixed(1), ((100 * missing[k]) / replications).toFixed(1), "an MA(1) 0.7 left out", "chi-square, 9 df"])));
}

/** Share of clean series in which the outlier search finds anything. */
function falseFinds(print: (line: string) => void, replications: number): void {
  const draw = normals(seeded(78));
  let finds = 0;
  for (let i = 0; i < replications; i++) {
    const x = makeSeries({ name: "x", values: autoregression(0.5)(120, draw) });
    if (outliers(fit({ series: x, ar: 1 })).found.length > 0) finds++;
  }
  print(`outlier search: something found in ${((100 * finds) / replications).toFixed(1)}% of ${replications} clean AR(1) series of 120 (four types at 120 dates each).`);
}

/** Time of 100 autocovariances of a million values. */
function speed(print: (line: string) => void): void {
  const draw = seeded(5), x = Float64Array.from({ length: 1_000_000 }, draw), times: number[] = [];
  for (let i = 0; i < 7; i++) {
    const from = performance.now();
    autocovariance(x, 100);
    times.push(performance.now() - from);
  }
  times.sort((a, b) => a - b);
  print(`autocovariances to lag 100 of 1,000,000 values: least ${times[0].toFixed(0)} ms, median ${times[3].toFixed(0)} ms.`);
}

function line(cells: readonly string[]): string {
  const widths = [30, 4, 9, 10, 7, 8, 26, 0];
  return cells.map((cell, i) => (i === 0 || i >= 6 ? cell.padEnd(widths[i]) : cell.padStart(widths[i]))).join("  ");
}
