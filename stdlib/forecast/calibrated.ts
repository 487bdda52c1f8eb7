// Bands set by how far the model really missed at held-out origins.

import { normalCdf, normalQuantile } from "../distributions/normal.ts";
import type { Note } from "../arma/model.ts";
import type { Series } from "../series/series.ts";
import type { Gradual } from "../gradual.ts";
import type { ModelOutlook } from "./modelOutlook.ts";
import { modelOutlook } from "./modelOutlook.ts";
import type { Forecaster } from "./model.ts";
import { crpsOfQuantiles, levelOf } from "./byQuantiles.ts";
import type { Outlook } from "./outlook.ts";
import type { Paths } from "./paths.ts";
import { firstIndex, lastIndex } from "./reach.ts";
import { refitBetween } from "./refit.ts";

/** At most this many held-out origins, the last third of the sample where that is less; fewer than the second number is too few. */
const mostOrigins = 60, fewestOrigins = 10;

/** Calibrates the bands at each horizon: the parameters are estimated on the data before the held-out origins and kept, the
 *  model's own standardised errors at the origins are collected, and a band of a level reaches as far as the
 *  (origins + 1) * level smallest of their absolute values (split conformal prediction: Lei et al. 2018).
 *  The median stays where it was. @throws RangeError where there are too few origins */
export function* calibratedOutlook(model: Forecaster, horizon: number, regressors: Readonly<Record<string, Series>>, seed: number, levels: readonly number[], plain: ModelOutlook): Gradual<{ readonly outlook: Outlook; readonly assumption: Note }> {
  const { base } = plain, count = Math.min(mostOrigins, Math.floor(base.n / 3) - horizon + 1);
  if (count < fewestOrigins) throw new RangeError(`forecast: calibrated bands need at least ${fewestOrigins} held-out origins in the last third of the sample; at horizon ${horizon} there are ${Math.max(0, count)}. Use bands: "plugIn" or "simulated", or a shorter horizon`);
  const misses = (yield* heldOutMisses(model, base, horizon, count, regressors, seed)).map((column) => column.filter((z) => !Number.isNaN(z)).map(Math.abs).sort());
  const thin = misses.findIndex((column) => column.length < fewestOrigins);
  if (thin >= 0) throw new RangeError(`forecast: calibrated bands need at least ${fewestOrigins} observed values to hold out at horizon ${thin + 1}; there are ${misses[thin].length}`);
  const beyond = levels.filter((level) => level > count / (count + 1)), ratio = misses.map((column) => Math.sqrt(column.reduce((s, z) => s + z * z, 0) / column.length));
  const text = `Bands: calibrated on the errors at ${count} held-out origins, with the parameters estimated before the first of them. They assume that coming errors are like those; no shape of distribution is assumed`
    + (beyond.length > 0 ? `, except that the ${beyond.map((l) => `${+(100 * l).toPrecision(4)}%`).join(", ")} band reaches beyond what ${count} origins can show and is extended as if normal` : "")
    + `. The model's own bands were ${inWords(ratio[0])} one step ahead${horizon > 1 ? `, and at ${horizon} steps ${inWords(ratio[horizon - 1])}` : ""}.`;
  return { outlook: stretched(plain.outlook, misses, ratio), assumption: { code: "bands-calibrated", tone: "note", text } };
}

function inWords(ratio: number): string {
  if (ratio > 1.1) return `too narrow by a factor of ${ratio.toFixed(2)}`;
  return ratio < 1 / 1.1 ? `too wide by a factor of ${(1 / ratio).toFixed(2)}` : "about right";
}

/** Standardised errors by horizon: the normal number whose probability the forecast gave to the actual value. */
function* heldOutMisses(model: Forecaster, base: Series, horizon: number, count: number, regressors: Readonly<Record<string, Series>>, seed: number): Gradual<Float64Array[]> {
  const from = firstIndex(base), end = lastIndex(base), columns = Array.from({ length: horizon }, () => new Float64Array(count).fill(NaN));
  const first = refitBetween(model, { from, to: end - horizon - count + 1, how: "fresh" });
  for (let k = 0; k < count; k++) {
    if (k > 0) yield { done: k, total: count, what: "held-out origins" };
    const origin = end - horizon - count + 1 + k, held = k === 0 ? first : refitBetween(model, { from, to: origin, how: "held" }, first);
    const { outlook } = modelOutlook(held, horizon, regressors, seed);
    for (let h = 0; h < horizon; h++) {
      const actual = base.values[origin + h + 1 - from];
      if (!Number.isNaN(actual)) columns[h][k] = Math.min(6, Math.max(-6, -normalQuantile(Math.min(1 - 1e-12, Math.max(1e-12, outlook.above(h, actual))))));
    }
  }
  return columns;
}

function stretched(plain: Outlook, misses: readonly Float64Array[], ratio: readonly number[]): Outlook {
  const { horizon } = plain;
  const reach = (h: number, level: number): number => {
    const column = misses[h], n = column.length, at = (n + 1) * level - 1;
    if (at <= 0) return column[0] * (at + 1);
    if (at <= n - 1) { const low = Math.floor(at), share = at - low; return share === 0 ? column[low] : column[low] * (1 - share) + column[low + 1] * share; }
    const furthest = n / (n + 1);
    return column[n - 1] * (normalQuantile((1 + level) / 2) / normalQuantile((1 + furthest) / 2));
  };
  const quantile = (p: number): Float64Array => Float64Array.from({ length: horizon }, (_, h) => {
    const z = Math.sign(p - 0.5) * Math.min(8, reach(h, Math.abs(2 * p - 1)));
    return plain.quantile(normalCdf(z))[h];
  });
  const paths = (count: number, seed: number): Paths => {
    // Each period's values move from the old distribution to the new one; what goes with what stays.
    const grid = Float64Array.from({ length: 81 }, (_, i) => normalCdf((i - 40) * 0.1)), old = Array.from(grid, plain.quantile), fresh = Array.from(grid, quantile);
    const olds = Array.from({ length: horizon }, (_, h) => old.map((q) => q[h])), news = Array.from({ length: horizon }, (_, h) => fresh.map((q) => q[h]));
    const { values, ...shape } = plain.paths(count, seed);
    return { ...shape, values: values.map((x, at) => between(x, olds[Math.floor(at / count)], news[Math.floor(at / count)])) };
  };
  return {
    ...plain, quantile, paths, sd: plain.sd.map((s, h) => s * ratio[h]), se: plain.se.map((s, h) => s * ratio[h]), normal: false, covariance: () => null,
    above: (h, value) => 1 - levelOf((p) => quantile(p)[h], value), crps: crpsOfQuantiles(quantile),
  };
}

/** Straight lines through points in increasing x; beyond the ends the last slope goes on. */
function between(x: number, from: readonly number[], to: readonly number[]): number {
  let low = 0, high = from.length - 1;
  while (high - low > 1) { const middle = (low + high) >> 1; if (from[middle] <= x) low = middle; else high = middle; }
  const width = from[high] - from[low];
  return width > 0 ? to[low] + ((x - from[low]) / width) * (to[high] - to[low]) : to[low];
}
