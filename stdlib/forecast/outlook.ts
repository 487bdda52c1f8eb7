// A forecast distribution in the units of the data: quantiles, means, paths, probabilities, scores.

import { normalCdf, normalQuantile } from "../distributions/normal.ts";
import { lognormalCrps, normalCrps, sampleCrps } from "../evaluation/scores.ts";
import { crpsOfNormals } from "./byQuantiles.ts";
import { once } from "./once.ts";
import { drawnPaths, drawsOf, normalPaths, pathCount, undoPaths, type Paths } from "./paths.ts";
import { diagonalRoots, factorAlong, factorOf, type Predictive } from "./predictive.ts";
import { isLinear, redoValue, undoCovariance, undoMean, undoValue, type UndoStep } from "./undo.ts";

export interface Outlook {
  readonly horizon: number;
  /** Data units. */
  readonly mean: Float64Array; readonly median: Float64Array;
  /** Standard deviations in data units. */
  readonly sd: Float64Array;
  /** Standard errors on the scale on which errors are normal (of the logs, say). */
  readonly se: Float64Array;
  /** The quantile of each period with probability p, in (0, 1). */
  readonly quantile: (p: number) => Float64Array;
  /** Probability that the value h periods ahead (0 is the first) lies above a value. */
  readonly above: (h: number, value: number) => number;
  /** Seeded sample paths in data units; they may be shared, and are not to be changed. */
  readonly paths: (count: number, seed: number) => Paths;
  /** Exact covariance matrix in data units, flat by rows; null where it is only known by simulation. */
  readonly covariance: () => Float64Array | null;
  /** Quantile with probability p of the ratio of two periods, later over earlier, where it has a closed form (logs). */
  readonly ratio?: (later: number, earlier: number, p: number) => number;
  /** Whether values in data units are jointly normal. */
  readonly normal: boolean;
  /** Continuous ranked probability score of the forecast h periods ahead. */
  readonly crps: (h: number, actual: number) => number;
}

/** Undoes the steps of a predictive distribution. Linear steps keep it normal; a log or Box-Cox is undone on quantiles
 *  directly, and the mean by its own formula (log) or by quadrature; whatever couples periods after that, by seeded draws. */
export function outlookOf(predictive: Predictive, steps: readonly UndoStep[], seed: number, draws = pathCount): Outlook {
  const size = predictive.mean.length, split = steps.findIndex((s) => !isLinear(s)), cut = split < 0 ? steps.length : split;
  const linear = steps.slice(0, cut), rest = steps.slice(cut);
  const mean = linear.reduce((m, step) => undoMean(step, m), predictive.mean);
  const covariance = once(() => linear.reduce((c, step) => undoCovariance(step, c, size), predictive.covariance()));
  const se = linear.length === 0 ? predictive.se : linear.every((s) => s.undo === "affine")
    ? predictive.se.map((s, h) => linear.reduce((v, step) => (step.undo === "affine" ? v * Math.abs(step.times[h]) : v), s)) : diagonalRoots(covariance(), size);
  const modelled: Predictive = { mean, covariance, se };
  const { draw } = predictive;
  if (draw) return drawnOutlook(modelled, rest, seed, draws, (count, from) => undoPaths(steps, drawnPaths(draw, count, size, from)));
  return rest.some((s) => s.undo === "difference") ? drawnOutlook(modelled, rest, seed, draws) : normalOutlook(modelled, rest);
}

/** Quantiles in closed form: each period is a monotone function of a normal number. */
function normalOutlook(predictive: Predictive, rest: readonly UndoStep[]): Outlook {
  const { mean: m, se } = predictive, horizon = m.length;
  const turnsOver = rest.reduce((sign, s) => (s.undo === "affine" && s.times[0] < 0 ? -sign : sign), 1) < 0;
  const quantile = (p: number): Float64Array => {
    const z = normalQuantile(turnsOver ? 1 - p : p);
    return m.map((v, h) => undoValue(rest, h, v + z * se[h]));
  };
  const moments = m.map((_, h) => h).reduce((all, h) => {
    const { mean, sd } = momentsAt(rest, h, m[h], se[h]);
    all.mean[h] = mean; all.sd[h] = sd;
    return all;
  }, { mean: new Float64Array(horizon), sd: new Float64Array(horizon) });
  // What a period's value in data units gains with its modelled one: the paths are drawn along the total of all periods.
  const slopes = (): Float64Array => m.map((v, h) => undoValue(rest, h, v + se[h] / 2) - undoValue(rest, h, v - se[h] / 2)).map((gain, h) => (Number.isFinite(gain) && se[h] > 0 ? gain / se[h] : 0));
  const factor = once(() => factorAlong(predictive.covariance(), horizon, slopes()));
  const form = formOf(rest);
  return {
    horizon, mean: moments.mean, median: m.map((v, h) => undoValue(rest, h, v)), sd: moments.sd, se, quantile, normal: form === "normal",
    above: (h, value) => {
      const z = (redoValue(rest, h, value) - m[h]) / se[h];
      return turnsOver ? normalCdf(z) : normalCdf(-z);
    },
    paths: (count, seed) => undoPaths(rest, normalPaths(m, factor(), count, seed)),
    covariance: () => (form === "normal" ? predictive.covariance() : form === "lognormal" ? lognormalCovariance(predictive.covariance(), moments.mean, rest) : null),
    ...(form === "lognormal" && rest.slice(1).every((s) => s.undo === "affine" && s.add.every((a) => a === 0)) ? { ratio: ratioOf(predictive, rest) } : {}),
    crps: (h, actual) => {
      if (form === "normal") return normalCrps(actual, m[h], se[h]);
      if (form === "lognormal") { const { add, times } = tailOf(rest, h); return Math.abs(times) * lognormalCrps((actual - add) / times, m[h], se[h]); }
      return crpsOfNormals((z) => undoValue(rest, h, m[h] + (turnsOver ? -z : z) * se[h]), actual);
    },
  };
}

/** Distribution by equally likely paths. Point forecasts in closed form stay what they are where the rest is linear. */
function drawnOutlook(predictive: Predictive, rest: readonly UndoStep[], seed: number, draws: number, own?: Outlook["paths"]): Outlook {
  const factor = once(() => factorOf(predictive.covariance(), predictive.mean.length));
  const paths = own ?? ((count: number, from: number): Paths => undoPaths(rest, normalPaths(predictive.mean, factor(), count, from)));
  return sampleOutlook(paths, draws, seed, predictive.se, rest.length === 0 ? predictive.mean : undefined);
}

/** Distribution that is known by sample paths in data units.
 *  @param paths  makes them; `count` of them from `seed` stand for the distribution, and are given again to whoever asks for those
 *  @param se     on the scale on which errors are normal; left out: that of the paths
 *  @param mean   where it is known better than by the sample's own */
export function sampleOutlook(paths: Outlook["paths"], count: number, seed: number, se?: Float64Array, mean?: Float64Array): Outlook {
  const sample = paths(count, seed), { horizon } = sample, average = new Float64Array(horizon), sd = new Float64Array(horizon);
  const sorted = Array.from({ length: horizon }, (_, h) => {
    const column = drawsOf(sample, h).slice().sort();
    ({ mean: average[h], sd: sd[h] } = momentsOf(column));
    return column;
  });
  const quantile = (p: number): Float64Array => Float64Array.from(sorted, (column) => quantileOf(column, p));
  return {
    horizon, mean: mean ?? average, median: quantile(0.5), sd, se: se ?? sd, quantile, normal: false, covariance: () => null,
    paths: (asked, from) => (asked === count && from === seed ? sample : paths(asked, from)),
    above: (h, value) => 1 - countUpTo(sorted[h], value) / sorted[h].length,
    crps: (h, actual) => sampleCrps(actual, sorted[h]),
  };
}

/** Mean and standard deviation of draws. */
export function momentsOf(draws: Float64Array): { readonly mean: number; readonly sd: number } {
  let sum = 0, squares = 0;
  for (let i = 0; i < draws.length; i++) sum += draws[i];
  const mean = sum / draws.length;
  for (let i = 0; i < draws.length; i++) squares += (draws[i] - mean) ** 2;
  return { mean, sd: Math.sqrt(squares / (draws.length - 1)) };
}

/** Quantile of sorted values, straight lines between them (the usual definition with (n - 1) p). */
export function quantileOf(sorted: Float64Array, p: number): number {
  const at = p * (sorted.length - 1), low = Math.floor(at), share = at - low;
  return share === 0 ? sorted[low] : sorted[low] * (1 - share) + sorted[low + 1] * share;
}

function countUpTo(sorted: Float64Array, value: number): number {
  let low = 0, high = sorted.length;
  while (low < high) { const middle = (low + high) >> 1; if (sorted[middle] <= value) low = middle + 1; else high = middle; }
  return low;
}

/** "normal": nothing left to undo; "lognormal": an exp and then affine steps; "other": the rest. */
function formOf(rest: readonly UndoStep[]): "normal" | "lognormal" | "other" {
  if (rest.length === 0) return "normal";
  return rest[0].undo === "exp" && rest.slice(1).every((s) => s.undo === "affine") ? "lognormal" : "other";
}

/** add + times x of the affine steps after the first one. */
function tailOf(rest: readonly UndoStep[], h: number): { readonly add: number; readonly times: number } {
  return rest.slice(1).reduce((t, s) => (s.undo === "affine" ? { add: s.add[h] + s.times[h] * t.add, times: s.times[h] * t.times } : t), { add: 0, times: 1 });
}

/** Mean and standard deviation in data units of a period that is a function of a normal number. */
function momentsAt(rest: readonly UndoStep[], h: number, m: number, se: number): { readonly mean: number; readonly sd: number } {
  const form = formOf(rest);
  if (form === "normal") return { mean: m, sd: se };
  if (form === "lognormal") {
    const { add, times } = tailOf(rest, h), middle = Math.exp(m + (se * se) / 2);
    return { mean: add + times * middle, sd: Math.abs(times) * middle * Math.sqrt(Math.expm1(se * se)) };
  }
  // The trapezoid rule on a normal weight: errors fall faster than any power of the step.
  let weight = 0, first = 0, second = 0;
  const middle = undoValue(rest, h, m);
  for (let i = -200; i <= 200; i++) {
    const z = i * 0.0425, w = Math.exp(-0.5 * z * z), x = undoValue(rest, h, m + z * se) - middle;
    weight += w; first += w * x; second += w * x * x;
  }
  const mean = first / weight;
  return { mean: middle + mean, sd: Math.sqrt(Math.max(0, second / weight - mean * mean)) };
}

/** The ratio of two lognormal values is lognormal: the difference of their logs is normal. */
function ratioOf({ mean, covariance }: Predictive, rest: readonly UndoStep[]): NonNullable<Outlook["ratio"]> {
  const c = once(covariance), size = mean.length;
  return (later, earlier, p) => {
    const variance = c()[later * size + later] + c()[earlier * size + earlier] - 2 * c()[later * size + earlier];
    return (tailOf(rest, later).times / tailOf(rest, earlier).times) * Math.exp(mean[later] - mean[earlier] + normalQuantile(p) * Math.sqrt(Math.max(0, variance)));
  };
}

function lognormalCovariance(c: Float64Array, mean: Float64Array, rest: readonly UndoStep[]): Float64Array {
  const size = mean.length, middle = mean.map((v, h) => v - tailOf(rest, h).add);
  return Float64Array.from(c, (v, at) => middle[Math.floor(at / size)] * middle[at % size] * Math.expm1(v));
}
