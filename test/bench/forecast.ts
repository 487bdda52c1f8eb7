// What proof at held-out origins costs, and whether the bands cover what they say.

import { execFileSync, spawnSync } from "node:child_process";
import { readFileSync } from "node:fs";
import { fit } from "../../stdlib/arma/fit.ts";
import { fitAt } from "../../stdlib/arma/fitAt.ts";
import { simulate } from "../../stdlib/arma/simulate.ts";
import type { Fit, FitOptions } from "../../stdlib/arma/model.ts";
import { binomialRange } from "../../stdlib/evaluation/binomialRange.ts";
import { rollingOrigins } from "../../stdlib/evaluation/rollingOrigins.ts";
import { bandedOutlook } from "../../stdlib/forecast/bands.ts";
import { forecast } from "../../stdlib/forecast/forecast.ts";
import { atOnce } from "../../stdlib/gradual.ts";
import type { BandsHow } from "../../stdlib/forecast/model.ts";
import { slice } from "../../stdlib/series/cut.ts";
import { makeSeries, type Series } from "../../stdlib/series/series.ts";
import { applySteps, type Step } from "../../stdlib/series/steps.ts";

const log: Step = { step: "log" }, plain: Step = { step: "difference", lag: 1 }, yearly = (lag: number): Step => ({ step: "difference", lag });

export async function bench(print: (line: string) => void): Promise<void> {
  await rollingCost(print);
  forecastCost(print);
  coverageOfKnownModels(print);
  await coverageOfOpenSeries(print);
}

/** A reference series; the bench is run from the project's folder. */
function open(id: string, every: string | null): Series {
  const rows = readFileSync(`test/reference/series/${id}.csv`, "utf8").trim().split(/\r?\n/).slice(1).map((line) => line.split(","));
  return makeSeries({ name: id, every, start: every === null ? "1" : rows[0][0], values: rows.map((r) => (r[1] === "" ? NaN : Number(r[1]))) });
}

async function rollingCost(print: (line: string) => void): Promise<void> {
  const series = applySteps(open("sim_sarima", "P1M"), [plain, yearly(12)]), origins = 120;
  const model = fit({ series, ma: 1, season: { length: 12, ma: 1 } });
  let last: Fit = model;
  const refits = timed(7, () => {
    last = model;
    for (let k = 0; k < origins; k++) last = fitAt(last, slice(series, 0, series.n - origins + k));
  });
  const whole = await timedAsync(5, () => rollingOrigins({ model }, { origins, horizon: 1, levels: [0.8, 0.95] }));
  print(`120 origins of (0,1,1)(0,1,1)12, n = 120 to 239, parameters estimated at each (processor time, median and range):`);
  print(`  refits alone ${show(refits)}; forecasts, scores, tests and naive rules with them ${show(whole)}`);
  const r = inR(origins);
  if (r === null) { print("  R is not installed here: no ratio."); return; }
  for (const [method, { ms, theta, Theta }] of Object.entries(r)) {
    print(`  R stats::arima, ${method}, with predict: ${ms.toFixed(0)} ms; ratio ${(ms / refits.median).toFixed(0)} to the refits, ${(ms / whole.median).toFixed(0)} to the whole evaluation. Last estimates ${theta.toFixed(4)}, ${Theta.toFixed(4)}; ours ${last.theta[0].toFixed(4)}, ${last.seasonalTheta[0].toFixed(4)}`);
  }
}

/** One forecast of a seasonal model of logs, by how its bands are made; and how far a limit from draws differs from seed to seed. */
function forecastCost(print: (line: string) => void): void {
  const series = applySteps(open("airline", "P1M"), [log, plain, yearly(12)]), model = fit({ series, ma: 1, season: { ma: 1 } }), asked = { horizon: 12, levels: [0.9] };
  const year = Array.from({ length: 40 }, (_, seed) => forecast(model, { ...asked, totals: "year", seed }).totals[0]), middle = year.reduce((sum, one) => sum + one.bands[0].low, 0) / year.length;
  const moves = Math.sqrt(year.reduce((sum, one) => sum + (one.bands[0].low - middle) ** 2, 0) / (year.length - 1)) / year[0].se;
  print(`\nA forecast 12 months ahead, airline model, n = 144 (processor time, median and range):`);
  print(`  plug-in ${show(timed(40, () => { forecast(model, asked); }))}; with the year's total ${show(timed(40, () => { forecast(model, { ...asked, totals: "year" }); }))}; simulated ${show(timed(7, () => { forecast(model, { ...asked, bands: "simulated" }); }))}; calibrated ${show(timed(7, () => { forecast(model, { ...asked, bands: "calibrated" }); }))}`);
  print(`  from seed to seed the total's 5% limit moves by ${(100 * moves).toFixed(2)}% of its standard error (standard deviation over 40 seeds)`);
}

interface Timed { readonly minimum: number; readonly median: number; readonly most: number }

/** Processor time, not the clock's: other work on the machine must not decide a ratio. */
function processorMs(since?: NodeJS.CpuUsage): number {
  const { user, system } = process.cpuUsage(since);
  return (user + system) / 1000;
}

function timed(repeats: number, run: () => void): Timed {
  const times: number[] = [];
  for (let i = 0; i <= repeats; i++) { const start = process.cpuUsage(); run(); if (i > 0) times.push(processorMs(start)); }
  return spread(times);
}

async function timedAsync(repeats: number, run: () => Promise<unknown>): Promise<Timed> {
  const times: number[] = [];
  for (let i = 0; i <= repeats; i++) { const start = process.cpuUsage(); await run(); if (i > 0) times.push(processorMs(start)); }
  return spread(times);
}

function spread(times: number[]): Timed {
  const sorted = times.sort((a, b) => a - b);
  return { minimum: sorted[0], median: sorted[Math.floor(sorted.length / 2)], most: sorted[sorted.length - 1] };
}

const show = ({ minimum, median, most }: Timed): string => `${median.toFixed(1)} ms (${minimum.toFixed(1)} to ${most.toFixed(1)})`;

/** The same refits by R, timed inside R; null where R is not there. */
function inR(origins: number): Record<string, { ms: number; theta: number; Theta: number }> | null {
  if (spawnSync("Rscript", ["--version"]).error) return null;
  const script = `x <- read.csv("test/reference/series/sim_sarima.csv")$value; n <- length(x)
for (m in c("ML", "CSS-ML")) {
  s <- sum(proc.time()[1:2])
  for (k in seq_len(${origins})) { f <- arima(ts(x[1:(n - ${origins} + k - 1)], frequency = 12), c(0, 1, 1), list(order = c(0, 1, 1), period = 12), method = m); p <- predict(f, n.ahead = 1) }
  cat(m, 1000 * (sum(proc.time()[1:2]) - s), coef(f), "\\n") }`;
  const lines = execFileSync("Rscript", ["-e", script], { encoding: "utf8" }).trim().split("\n").map((line) => line.trim().split(/\s+/));
  return Object.fromEntries(lines.map(([method, ms, theta, Theta]) => [method, { ms: Number(ms), theta: Number(theta), Theta: Number(Theta) }]));
}

/** Several hundred series of each known model: how often the bands hold the value that the model then makes. */
function coverageOfKnownModels(print: (line: string) => void): void {
  const replications = 400, levels = [0.8, 0.95], horizons = [1, 4, 12];
  print(`\nCoverage on ${replications} simulated series of each known model, orders known (binomial 95% range of 80%: ${range(replications, 0.8)}; of 95%: ${range(replications, 0.95)}):`);
  const models: { name: string; n: number; make: (seed: number, n: number) => Series; ask: Omit<FitOptions, "series">; truth: FitOptions["hold"] }[] = [
    { name: "AR(1), phi 0.7, n = 50", n: 50, make: (seed, n) => simulate({ phi: [0.7], mean: 10 }, n, seed), ask: { ar: 1 }, truth: { phi: [0.7], mean: 10, sigma2: 1 } },
    { name: "AR(2), phi 1.2 -0.5, n = 200", n: 200, make: (seed, n) => simulate({ phi: [1.2, -0.5] }, n, seed), ask: { ar: 2 }, truth: { phi: [1.2, -0.5], mean: 0, sigma2: 1 } },
    { name: "ARMA(1,1), phi 0.8 theta -0.4, n = 200", n: 200, make: (seed, n) => simulate({ phi: [0.8], theta: [-0.4], mean: 5 }, n, seed), ask: { ar: 1, ma: 1 }, truth: { phi: [0.8], theta: [-0.4], mean: 5, sigma2: 1 } },
    { name: "(0,1,1)(0,1,1)12, theta -0.4 -0.6, n = 144", n: 144, make: seasonalWalk, ask: { ma: 1, season: { length: 12, ma: 1 } }, truth: { theta: [-0.4], seasonalTheta: [-0.6], sigma2: 1 } },
  ];
  for (const how of ["known", "plugIn", "simulated", "calibrated"] as const) {
    for (const { name, n, make, ask, truth } of models) {
      // A last third of 50 has no room for held-out origins 12 steps ahead.
      if (how === "calibrated" && n < 100) continue;
      // A hundred refits a series are dear: the simulated kind is tried on fewer series, whose own range is wider.
      const tries = how === "simulated" ? 150 : how === "calibrated" ? 200 : replications;
      const hits = covered(tries, n, make, how === "known" ? { ...ask, hold: truth } : ask, how === "known" ? "plugIn" : how, levels, horizons);
      print(`  ${(how === "known" ? "parameters known" : how).padEnd(17)} ${name.padEnd(44)} ${horizons.map((h, i) => `h = ${h}: ${levels.map((l, j) => `${percent(hits[i][j] / tries)}${within(hits[i][j], tries, l)}`).join(" ")}`).join("   ")}${tries < replications ? `   (${tries} series)` : ""}`);
    }
  }
  print("  * outside the binomial range of independent tries.");
}

const within = (hits: number, n: number, level: number): string => { const { low, high } = binomialRange(n, level); return hits / n < low - 1e-9 || hits / n > high + 1e-9 ? "*" : " "; };
const percent = (x: number): string => `${(100 * x).toFixed(1)}%`;
const range = (n: number, level: number): string => { const { low, high } = binomialRange(n, level); return `${percent(low)} to ${percent(high)}`; };

function covered(tries: number, n: number, make: (seed: number, n: number) => Series, ask: Omit<FitOptions, "series">, how: BandsHow, levels: readonly number[], horizons: readonly number[]): number[][] {
  const horizon = Math.max(...horizons), hits = horizons.map(() => levels.map(() => 0));
  for (let r = 0; r < tries; r++) {
    const all = make(1000 + r, n + horizon), lost = (all.steps[0]?.before.n ?? all.n) - all.n, model = fit({ ...ask, series: slice(all, 0, n - lost) }, { standardErrors: false });
    const { outlook } = atOnce(bandedOutlook(model, horizon, { how, regressors: {}, seed: r, levels })), data = all.steps[0]?.before.values ?? all.values;
    levels.forEach((level, j) => {
      const low = outlook.quantile((1 - level) / 2), high = outlook.quantile((1 + level) / 2);
      horizons.forEach((h, i) => { const y = data[n + h - 1]; if (y >= low[h - 1] && y <= high[h - 1]) hits[i][j]++; });
    });
  }
  return hits;
}

function seasonalWalk(seed: number, n: number): Series {
  const w = simulate({ theta: [-0.4], seasonalTheta: [-0.6], seasonLength: 12 }, n, seed).values, y = new Float64Array(n);
  for (let t = 0; t < n; t++) y[t] = t < 13 ? Math.sin(t) * 3 : w[t] + y[t - 1] + y[t - 12] - y[t - 13];
  return applySteps(makeSeries({ name: "x", values: y }), [plain, yearly(12)]);
}

/** Real series: bands of a plain model of each against what came next, at many origins. */
async function coverageOfOpenSeries(print: (line: string) => void): Promise<void> {
  const levels = [0.8, 0.95], horizon = 4;
  const models: { id: string; every: string | null; steps: Step[]; ask: Omit<FitOptions, "series"> }[] = [
    { id: "airline", every: "P1M", steps: [log, plain, yearly(12)], ask: { ma: 1, season: { ma: 1 } } }, { id: "usaccdeaths", every: "P1M", steps: [plain, yearly(12)], ask: { ma: 1, season: { ma: 1 } } },
    { id: "co2", every: "P1M", steps: [plain, yearly(12)], ask: { ma: 1, season: { ma: 1 } } }, { id: "drivers", every: "P1M", steps: [log, plain, yearly(12)], ask: { ma: 1, season: { ma: 1 } } },
    { id: "elnino", every: "P1M", steps: [yearly(12)], ask: { ar: 2, season: { ma: 1 } } }, { id: "johnsonjohnson", every: "P3M", steps: [log, plain, yearly(4)], ask: { ma: 1, season: { ma: 1 } } },
    { id: "realgdp", every: "P3M", steps: [log, plain], ask: { ar: 2, mean: true } }, { id: "cpi", every: "P3M", steps: [log, plain], ask: { ar: 3, mean: true } }, { id: "presidents", every: "P3M", steps: [], ask: { ar: 2 } },
    { id: "nile", every: "P1Y", steps: [plain], ask: { ma: 1 } }, { id: "lakehuron", every: "P1Y", steps: [], ask: { ar: 2 } }, { id: "lynx", every: "P1Y", steps: [log], ask: { ar: 2 } },
    { id: "np_unemp", every: "P1Y", steps: [log], ask: { ar: 2 } }, { id: "np_realgnp", every: "P1Y", steps: [log, plain], ask: { ar: 1, mean: true } }, { id: "bjsales", every: null, steps: [plain], ask: { ar: 1, ma: 1 } },
  ];
  print(`\nCoverage on ${models.length} open series, one plain model each, up to 60 last origins, 1 to ${horizon} steps ahead, plug-in bands, parameters estimated at each origin:`);
  const sums = levels.map(() => ({ hits: 0, n: 0 })), worst: string[] = [];
  for (const { id, every, steps, ask } of models) {
    const model = fit({ ...ask, series: applySteps(open(id, every), steps) }), n = model.options.series.n, origins = Math.min(60, Math.floor(n / 2));
    const found = await rollingOrigins({ [id]: model }, { origins, horizon, levels }), all = found.scores.find((s) => s.horizon === "all");
    if (!all) continue;
    all.coverage.forEach((c, j) => { sums[j].hits += c.share * c.n; sums[j].n += c.n; });
    worst.push(`  ${id.padEnd(16)} ${all.coverage.map((c) => `${percent(c.level)}: ${percent(c.share)}`).join("   ")}   MASE ${all.mase.toFixed(2)}, naive ${found.naive.mase.toFixed(2)}   ${found.models[0].beatsNaive === "yes" ? "beats naive" : found.models[0].beatsNaive === "no" ? "does not beat naive" : "better than naive is not shown"}`);
  }
  worst.forEach(print);
  print(`  all together     ${levels.map((l, j) => `${percent(l)}: ${percent(sums[j].hits / sums[j].n)}, ${shortfall(l - sums[j].hits / sums[j].n)}`).join("   ")}`);
}

const shortfall = (x: number): string => (x > 0 ? `${(100 * x).toFixed(1)} points short` : `${(-100 * x).toFixed(1)} points over`);
