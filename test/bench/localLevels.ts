// Makes the table of local levels in stdlib/diagnostics/qq.ts: how far out the most extreme order statistic of a standardised
// normal sample lies, as a two-sided beta tail.

import { normalCdf } from "../../stdlib/distributions/normal.ts";
import { betaInc } from "../../stdlib/distributions/special.ts";
import { normals, seeded } from "../../stdlib/forecast/random.ts";

/** Prints a row a size: the 10%, 5% and 1% quantiles of the smallest two-sided tail. */
export function localLevels(print: (line: string) => void, scale = 1): void {
  for (const [n, full] of [[5, 20_000], [10, 20_000], [20, 20_000], [50, 20_000], [100, 8000], [200, 8000], [500, 3000], [1000, 2000], [3000, 1000]]) {
    const reps = Math.max(100, Math.round(full * scale)), draw = normals(seeded(7));
    const smallest = Array.from({ length: reps }, () => smallestTail(n, draw)).sort((a, b) => a - b);
    print(`  [${[0.1, 0.05, 0.01].map((a) => smallest[Math.floor(a * reps)].toPrecision(3)).join(", ")}], // n = ${n}, ${reps} samples`);
  }
}

function smallestTail(n: number, draw: () => number): number {
  const x = Float64Array.from({ length: n }, draw).sort();
  const mean = x.reduce((s, v) => s + v, 0) / n, sd = Math.sqrt(x.reduce((s, v) => s + (v - mean) ** 2, 0) / (n - 1));
  let least = 1;
  for (let i = 0; i < n; i++) {
    const u = normalCdf((x[i] - mean) / sd), centre = (i + 1) / (n + 1);
    // A point close to its expectation cannot hold the smallest tail of a long sample: its beta tail is above 0.2.
    if (n > 50 && Math.abs(u - centre) < 1.2 * Math.sqrt((centre * (1 - centre)) / (n + 2))) continue;
    const p = betaInc(u, i + 1, n - i);
    least = Math.min(least, 2 * Math.min(p, 1 - p));
  }
  return least;
}

/** A tenth of the samples, so that the bench stays short; `localLevels(print)` makes the full table. */
export function bench(print: (line: string) => void): void {
  localLevels(print, 0.1);
}
