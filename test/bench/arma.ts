// Times of estimation against R's stats::arima and statsmodels' SARIMAX in the same run, on the same series.
// Every time is the median of warm repeats and includes standard errors, unless the row says otherwise.

import { execFileSync } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fit } from "../../stdlib/arma/fit.ts";
import { fitAt } from "../../stdlib/arma/fitAt.ts";
import type { FitOptions } from "../../stdlib/arma/model.ts";
import { simulate } from "../../stdlib/arma/simulate.ts";
import { orderFitter } from "../../stdlib/evaluation/orderFitter.ts";
import { slice } from "../../stdlib/series/cut.ts";
import { makeSeries, type Series } from "../../stdlib/series/series.ts";
import { applySteps } from "../../stdlib/series/steps.ts";

interface Row {
  readonly name: string;
  /** Levels; differences are in `order`. */
  readonly levels: Series;
  readonly order: readonly [number, number, number];
  readonly seasonal: readonly [number, number, number, number];
  readonly mean: boolean;
  readonly repeats: number;
  /** Reference programs that would take minutes are left out, and the row says so. */
  readonly references: readonly ("R ML" | "R CSS-ML" | "statsmodels")[];
}

const ALL = ["R ML", "R CSS-ML", "statsmodels"] as const;

function rows(): Row[] {
  const root = new URL("../../test/reference/series/", import.meta.url);
  const airline = readFileSync(new URL("airline.csv", root), "utf8").trim().split(/\r?\n/).slice(1).map(line => Math.log(Number(line.split(",")[1])));
  const gaps = airline.map((v, t) => [19, 36, 37, 38, 59, 99, 100, 129].includes(t) ? NaN : v);
  const plain = (n: number) => simulate({ phi: [1.2, -0.45], theta: [0.5], mean: 5 }, n, 2);
  const gappy = makeSeries({ name: "gappy", values: simulate({ phi: [0.8], theta: [0.3], mean: 20 }, 1000, 5).values.map((v, t) => t % 13 === 5 ? NaN : v) });
  const none: [number, number, number, number] = [0, 0, 0, 1];
  return [
    { name: "AR(2), n = 200", levels: simulate({ phi: [0.5, 0.3], mean: 5 }, 200, 1), order: [2, 0, 0], seasonal: none, mean: true, repeats: 200, references: ALL },
    { name: "ARMA(2,1), n = 200", levels: plain(200), order: [2, 0, 1], seasonal: none, mean: true, repeats: 200, references: ALL },
    { name: "ARMA(2,1), n = 2,000", levels: plain(2000), order: [2, 0, 1], seasonal: none, mean: true, repeats: 60, references: ALL },
    { name: "ARMA(2,1), n = 100,000", levels: plain(100_000), order: [2, 0, 1], seasonal: none, mean: true, repeats: 7, references: ["R CSS-ML"] },
    { name: "(0,1,1)(0,1,1)12, n = 144", levels: makeSeries({ name: "airline", values: airline }), order: [0, 1, 1], seasonal: [0, 1, 1, 12], mean: false, repeats: 60, references: ALL },
    { name: "the same, 8 gaps", levels: makeSeries({ name: "airline", values: gaps }), order: [0, 1, 1], seasonal: [0, 1, 1, 12], mean: false, repeats: 20, references: ["R ML", "statsmodels"] },
    { name: "ARMA(1,1), n = 1,000, 77 gaps", levels: gappy, order: [1, 0, 1], seasonal: none, mean: true, repeats: 10, references: ["R ML", "statsmodels"] },
    { name: "(2,0,1)(1,0,1)12, n = 480", levels: simulate({ phi: [0.5, 0.2], theta: [0.3], seasonalPhi: [0.7], seasonalTheta: [-0.3], seasonLength: 12 }, 480, 2), order: [2, 0, 1], seasonal: [1, 0, 1, 12], mean: true, repeats: 15, references: ["R CSS-ML", "statsmodels"] },
    { name: "(1,0,1)(1,0,1)24, n = 2,000", levels: simulate({ phi: [0.6], theta: [0.3], seasonalPhi: [0.7], seasonalTheta: [-0.3], seasonLength: 24 }, 2000, 3), order: [1, 0, 1], seasonal: [1, 0, 1, 24], mean: true, repeats: 9, references: ["R CSS-ML"] },
    { name: "(1,0,1)(1,0,1)52, n = 520", levels: simulate({ phi: [0.6], theta: [0.3], seasonalPhi: [0.7], seasonalTheta: [-0.3], seasonLength: 52 }, 520, 4), order: [1, 0, 1], seasonal: [1, 0, 1, 52], mean: true, repeats: 5, references: ["R CSS-ML"] },
    { name: "(0,0,1)(1,0,1)168, n = 2,000", levels: simulate({ theta: [0.3], seasonalPhi: [0.7], seasonalTheta: [-0.3], seasonLength: 168 }, 2000, 4), order: [0, 0, 1], seasonal: [1, 0, 1, 168], mean: true, repeats: 3, references: [] },
    { name: "ARMA(2,1), n = 1,000,000", levels: plain(1_000_000), order: [2, 0, 1], seasonal: none, mean: true, repeats: 1, references: [] },
  ];
}

/** Prints the table; rows in the order of numerics: our median, first call, each reference's median, ratios, and our lead in log-likelihood. */
export function bench(print: (line: string) => void): void {
  const folder = mkdtempSync(join(tmpdir(), "lagbook-bench-"));
  try {
    const list = rows();
    list.forEach((row, i) => writeFileSync(join(folder, `${i}.txt`), [...row.levels.values].map(v => Number.isNaN(v) ? "NA" : v).join("\n")));
    const r = reference("Rscript", rScript(list, folder), folder, "run.R", print);
    const python = reference("/usr/bin/python3", pythonScript(list, folder), folder, "run.py", print);
    print("times in ms, standard errors included; ratio = reference / ours; dl = our log-likelihood less the reference's best");
    print(["model".padEnd(32), "first", "ours", ...ALL, ...ALL.map(name => `x ${name}`), "dl"].map(c => c.padStart(12)).join(""));
    list.forEach((row, i) => {
      const options = optionsOf(row);
      let began = performance.now();
      let found = fit(options);
      const first = performance.now() - began, times: number[] = [];
      // Warm: compiled code, as after a reader's first few moves.
      for (const until = performance.now() + 300; performance.now() < until;) fit(options);
      for (let k = 0; k < row.repeats; k++) { began = performance.now(); found = fit(options); times.push(performance.now() - began); }
      const ours = median(times);
      const theirs = ALL.map(name => name === "statsmodels" ? python[`${i}`] : r[`${i} ${name}`]);
      const best = Math.max(...theirs.map(t => t?.logLik ?? -Infinity));
      print([row.name.padEnd(32), first.toFixed(2), ours.toFixed(3), ...theirs.map(t => t ? t.ms.toFixed(1) : "-"), ...theirs.map(t => t ? (t.ms / ours).toFixed(0) : "-"),
        Number.isFinite(best) ? (found.logLikelihood - best).toExponential(1) : "-"].map(c => c.padStart(12)).join(""));
    });
    many(print, r, python);
  } finally { rmSync(folder, { recursive: true, force: true }); }
}

/** A grid of 36 orders and 120 rolling refits; ours without standard errors, as a grid and a rolling forecast use them. */
function many(print: (line: string) => void, r: Timings, python: Timings): void {
  const series = simulate({ phi: [1.2, -0.45], theta: [0.5], mean: 5 }, 200, 2);
  const orders = Array.from({ length: 36 }, (_, i) => ({ ar: Math.floor(i / 6), ma: i % 6, seasonalAr: 0, seasonalMa: 0 }));
  const grid = () => { orders.forEach(orderFitter({ series }, undefined, { standardErrors: false })); };
  const apart = () => { for (const { ar, ma } of orders) fit({ series, ar, ma }, { standardErrors: false }); };
  const airline = optionsOf(rows()[4]);
  const base = fit({ ...airline, series: slice(airline.series, 0, 100) });
  const rolling = () => { for (let k = 0; k < 120; k++) fitAt(base, slice(airline.series, 0, 100 + k % 31)); };
  const report = (name: string, work: () => void, key: string, times: number) => {
    const took: number[] = [];
    for (const until = performance.now() + 1000; performance.now() < until;) work();
    for (let k = 0; k < 9; k++) { const began = performance.now(); work(); took.push(performance.now() - began); }
    const ours = median(took), a = r[key];
    // statsmodels refits 6 of the 120 only, to keep the run short: scaled up.
    const b = python[key] && key === "rolling" ? { ms: python[key].ms * 20 } : python[key];
    print(`${name.padEnd(32)} ours ${ours.toFixed(1)} ms (${(ours / times).toFixed(3)} each)${a ? `, R CSS-ML ${a.ms.toFixed(0)} (x ${(a.ms / ours).toFixed(0)})` : ""}${b ? `, statsmodels ${b.ms.toFixed(0)} (x ${(b.ms / ours).toFixed(0)})` : ""}`);
  };
  report("36 orders, n = 200", grid, "grid", 36);
  report("the same, each by itself", apart, "grid", 36);
  report("120 rolling refits, season 12", rolling, "rolling", 120);
}

function optionsOf(row: Row): FitOptions {
  const { order, seasonal } = row;
  const steps = [...Array.from({ length: order[1] }, () => ({ step: "difference" as const, lag: 1 })), ...Array.from({ length: seasonal[1] }, () => ({ step: "difference" as const, lag: seasonal[3] }))];
  return {
    series: applySteps(row.levels, steps), ar: order[0], ma: order[2], mean: row.mean,
    ...(seasonal[0] + seasonal[2] > 0 ? { season: { length: seasonal[3], ar: seasonal[0], ma: seasonal[2] } } : {}),
  };
}

function median(times: number[]): number { return times.sort((a, b) => a - b)[times.length >> 1]; }

type Timings = Readonly<Record<string, { ms: number; logLik?: number } | undefined>>;

/** Runs a reference program, which prints lines "key|ms|logLik". Not installed: said, and the columns stay empty. */
function reference(command: string, script: string, folder: string, file: string, print: (line: string) => void): Timings {
  writeFileSync(join(folder, file), script);
  try {
    const out = execFileSync(command, [join(folder, file)], { encoding: "utf8", stdio: ["ignore", "pipe", "ignore"], timeout: 600_000 });
    return Object.fromEntries(out.trim().split("\n").map(line => { const [key, ms, logLik] = line.split("|"); return [key, { ms: Number(ms), ...(logLik ? { logLik: Number(logLik) } : {}) }]; }));
  } catch {
    print(`(${command} did not run here: its columns are empty)`);
    return {};
  }
}

function rScript(list: readonly Row[], folder: string): string {
  const lines = ["timed <- function(key, f, times) { r <- tryCatch({ x <- f(); t <- sapply(1:times, function(i) { a <- proc.time()[[3]]; f(); proc.time()[[3]] - a }); if (times > 1 && median(t) < 0.02) { a <- proc.time()[[3]]; for (i in 1:20) f(); t <- (proc.time()[[3]] - a) / 20 }; cat(key, '|', 1000 * median(t), '|', format(x, digits = 15), '\\n', sep = '') }, error = function(e) NULL) }"];
  list.forEach((row, i) => {
    lines.push(`x <- scan('${join(folder, `${i}.txt`)}', quiet = TRUE)`);
    const [p, d, q] = row.order, [P, D, Q, s] = row.seasonal;
    for (const method of ["ML", "CSS-ML"] as const) {
      if (!row.references.includes(`R ${method}`)) continue;
      lines.push(`timed('${i} R ${method}', function() arima(x, order = c(${p}, ${d}, ${q}), seasonal = list(order = c(${P}, ${D}, ${Q}), period = ${s}), include.mean = ${row.mean ? "TRUE" : "FALSE"}, method = '${method}')$loglik, ${row.levels.n > 1000 || s > 20 ? 1 : 5})`);
    }
  });
  lines.push(`x <- scan('${join(folder, "1.txt")}', quiet = TRUE)`, "timed('grid', function() { for (p in 0:5) for (q in 0:5) try(suppressWarnings(arima(x, order = c(p, 0, q), method = 'CSS-ML')), silent = TRUE); 0 }, 1)");
  lines.push(`x <- scan('${join(folder, "4.txt")}', quiet = TRUE)`, "timed('rolling', function() { for (k in 0:119) arima(x[1:(113 + k %% 31)], order = c(0, 1, 1), seasonal = list(order = c(0, 1, 1), period = 12), method = 'CSS-ML'); 0 }, 1)");
  return lines.join("\n");
}

function pythonScript(list: readonly Row[], folder: string): string {
  const lines = ["import time, warnings, numpy as np", "warnings.simplefilter('ignore')", "from statsmodels.tsa.statespace.sarimax import SARIMAX",
    "def read(name): return np.array([np.nan if v.strip() == 'NA' else float(v) for v in open(name)])",
    "def timed(key, f, times):", "    try:", "        x = f(); t = []", "        for _ in range(times):", "            a = time.perf_counter(); f(); t.append(time.perf_counter() - a)", "        print(f'{key}|{1000 * sorted(t)[len(t) // 2]}|{x}')", "    except Exception: pass"];
  const model = (row: Row, data: string) => `SARIMAX(${data}, order=(${row.order.join(", ")}), seasonal_order=(${row.seasonal[3] > 1 ? row.seasonal.join(", ") : "0, 0, 0, 0"}), trend=${row.mean ? "'c'" : "'n'"})`;
  list.forEach((row, i) => {
    if (!row.references.includes("statsmodels")) return;
    const differenced = row.order[1] + row.seasonal[1] > 0;
    lines.push(`x = read('${join(folder, `${i}.txt`)}')`, `timed('${i}', lambda: ${differenced ? `(${model(row, "x")}.fit(disp=0), np.nan)[1]` : `${model(row, "x")}.fit(disp=0).llf`}, ${row.levels.n > 1000 ? 1 : 3})`);
  });
  lines.push(`x = read('${join(folder, "1.txt")}')`, "timed('grid', lambda: [SARIMAX(x, order=(p, 0, q), trend='c').fit(disp=0) for p in range(6) for q in range(6)] and 0, 1)");
  lines.push(`x = read('${join(folder, "4.txt")}')`, "timed('rolling', lambda: [SARIMAX(x[:113 + k % 31], order=(0, 1, 1), seasonal_order=(0, 1, 1, 12)).fit(disp=0) for k in range(6)] and 0, 1)");
  return lines.join("\n");
}
