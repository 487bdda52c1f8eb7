// What a warm median does not show: the first fit in a fresh worker, with and without its warm-up, and the memory of a long fit.

import { execFileSync } from "node:child_process";
import { Worker } from "node:worker_threads";
import { fit } from "../../stdlib/arma/fit.ts";
import type { FitOptions } from "../../stdlib/arma/model.ts";
import { simulate } from "../../stdlib/arma/simulate.ts";
import { warmUp } from "../../stdlib/arma/warmUp.ts";

const LONG = 1_000_000;

/** Prints first-fit times against a frame's 16 ms, and a million observations' time and memory. */
export async function bench(print: (line: string) => void): Promise<void> {
  for (const warm of [false, true]) {
    const runs: (readonly number[])[] = [];
    for (let k = 0; k < 7; k++) runs.push(await inWorker(warm));
    const [warming, plain, seasonal] = [0, 1, 2].map(i => runs.map(r => r[i]).sort((a, b) => a - b)[runs.length >> 1]);
    print(`fresh worker${warm ? `, warmed up for ${warming.toFixed(0)} ms` : ", cold"}: first ARMA(2,1), n = 200: ${plain.toFixed(1)} ms; first (0,1,1)(0,1,1)12, n = 144: ${seasonal.toFixed(1)} ms (targets 16)`);
  }
  const { ms, copies } = JSON.parse(execFileSync(process.execPath, ["--input-type=module", "-e", `const m = await import(${JSON.stringify(import.meta.url)}); console.log(JSON.stringify(m.longFit()));`], { encoding: "utf8" })) as { ms: number; copies: number };
  print(`ARMA(2,1), n = 1,000,000, first and only fit of its process: ${ms.toFixed(0)} ms (target 1,000), memory at most ${copies.toFixed(1)} copies of the series above it (target 10)`);
}

/** Milliseconds of the warm-up (0 for none) and of the first plain and first seasonal fit, as a worker that has just started meets them. */
export function firstFits(warm: boolean): readonly number[] {
  const timed = (work: () => void): number => { const began = performance.now(); work(); return performance.now() - began; };
  const plain: FitOptions = { series: simulate({ phi: [1.2, -0.45], theta: [0.5], mean: 5 }, 200, 2), ar: 2, ma: 1 };
  const seasonal: FitOptions = { series: simulate({ theta: [-0.4], seasonalTheta: [-0.5], seasonLength: 12 }, 131, 2), ma: 1, mean: false, season: { length: 12, ma: 1 } };
  return [warm ? timed(() => { for (const slices = warmUp(); !slices.next().done;); }) : 0, timed(() => fit(plain)), timed(() => fit(seasonal))];
}

/** Time of one long fit, and how far the process's largest memory rose above what it had with the series in hand. */
export function longFit(): { readonly ms: number; readonly copies: number } {
  const series = simulate({ phi: [1.2, -0.45], theta: [0.5], mean: 5 }, LONG, 2);
  const before = Math.max(process.memoryUsage.rss(), 1024 * process.resourceUsage().maxRSS), began = performance.now();
  fit({ series, ar: 2, ma: 1 });
  return { ms: performance.now() - began, copies: (1024 * process.resourceUsage().maxRSS - before) / (8 * LONG) };
}

function inWorker(warm: boolean): Promise<readonly number[]> {
  const code = `import(${JSON.stringify(import.meta.url)}).then(m => require("node:worker_threads").parentPort.postMessage(m.firstFits(${warm})))`;
  return new Promise((resolve, reject) => { new Worker(code, { eval: true }).on("message", resolve).on("error", reject); });
}
