// Proof at held-out origins: every model forecasts from each of them, is scored, tested against the others and against naive rules.

import { defaultSeasonLength } from "../series/every.ts";
import { slice } from "../series/cut.ts";
import { isSeries, type Series } from "../series/series.ts";
import { isRule, rule } from "../forecast/rules.ts";
import type { Fit } from "../arma/model.ts";
import type { Forecaster } from "../forecast/model.ts";
import { lossDifferenceTest, type Loss } from "./dieboldMariano.ts";
import { modelConfidenceSet, type ConfidenceSet } from "./modelConfidenceSet.ts";
import { rollingFrame, rollModels, timesAfter, type Hooks, type Labelled, type Rolled, type RollingFrame, type RollingOptions } from "./rolling.ts";
import { scoreTable, type Score } from "./scoreTable.ts";
import { rankSentences } from "./verdict.ts";

export type RankBy = "mase" | "mae" | "rmse" | "rmsse" | "mape" | "smape" | "crps" | "pinball";

export interface CompareOptions extends RollingOptions {
  readonly rank?: RankBy;
  /** Season length of MASE and RMSSE; default that of a model or of the spacing. */
  readonly length?: number;
  /** Loss of the tests between models; default the absolute error. */
  readonly loss?: Loss;
}

/** Whether a difference between two models at a horizon is more than chance. Losses are A less B. */
export interface Against {
  readonly a: string; readonly b: string;
  readonly horizon: number | "all";
  /** Diebold-Mariano with the correction of Harvey, Leybourne & Newbold; NaN where there is no test, with the reason in `note`. */
  readonly statistic: number; readonly p: number;
  readonly meanDifference: number;
  readonly n: number;
  readonly note?: string;
}

export interface RankedModel extends Score {
  /** 1 is the best; models with the same score share a rank. */
  readonly rank: number;
  readonly model: Forecaster;
  /** The fit, where the model is one. */
  readonly fit?: Fit;
  /** Criteria of that fit to its whole sample: of different data where the steps differ. */
  readonly aic?: number; readonly aicc?: number; readonly bic?: number;
  /** p-value and membership of the model confidence set. */
  readonly setP: number; readonly inSet: boolean;
  /** Against the better naive rule: "yes" = better and not by chance, "no" = not better, "not shown" = better by what chance may do. */
  readonly beatsNaive: "yes" | "no" | "not shown";
  readonly sentence: string;
}

/** One model's forecasts from one origin beside what happened, in data units. */
export interface OriginForecast {
  readonly label: string; readonly origin: string;
  readonly times: readonly string[];
  readonly actual: Float64Array; readonly mean: Float64Array; readonly median: Float64Array;
  readonly bands: readonly { readonly level: number; readonly low: Float64Array; readonly high: Float64Array }[];
}

export interface Evaluation {
  readonly models: readonly RankedModel[];
  readonly best: RankedModel;
  readonly rankedBy: RankBy;
  readonly scores: readonly Score[];
  readonly against: readonly Against[];
  readonly confidenceSet: ConfidenceSet;
  /** The naive rule that the models had to beat, with its scores over all horizons. */
  readonly naive: Score;
  /** The same at each horizon, "all" last. */
  readonly naiveScores: readonly Score[];
  readonly origins: readonly string[];
  readonly horizon: number;
  readonly unit: string; readonly name: string;
  /** The data that the models had in common, in the units of the forecasts. */
  readonly observed: Series;
  readonly forecasts: readonly OriginForecast[];
  readonly failures: readonly { readonly label: string; readonly origin: string; readonly reason: string }[];
  /** False where the work was stopped early: the scores are over the origins that every model had finished. */
  readonly complete: boolean;
  readonly done: number; readonly total: number;
  readonly sentence: string;
  readonly notes: readonly string[];
}

/** Evaluates models and rules at rolling origins.
 *  At each origin a model sees the data up to it and nothing else, and its transform steps are taken again on them.
 *  Errors are in the units of the data. Future values of regressors that are series are the observed ones.
 *  @throws RangeError in words where the models are not of one series, or leave no room for the origins */
export async function rollingOrigins(models: readonly Labelled[] | readonly Forecaster[] | Readonly<Record<string, Forecaster>>, options: CompareOptions, hooks: Hooks = {}): Promise<Evaluation> {
  const given = labelled(models), frame = rollingFrame(given, options), length = options.length ?? seasonOf(given, frame);
  const all = [...given, ...naiveRules(given, frame, length)], total = all.length * frame.at.length;
  let done = 0;
  const rolled = await rollModels(all, frame, options, hooks, (label) => { done++; hooks.progress?.(done, total, label); });
  return summarise(given, rolled, frame, { ...options, length }, done, total);
}

/** Ranks, tests and words from the forecasts of each model (made here, or elsewhere in parts).
 *  @param rolled  of the models in order, then of the naive rules that stand beside them */
function summarise(given: readonly Labelled[], rolled: readonly Rolled[], frame: RollingFrame, options: CompareOptions & { readonly length: number }, done: number, total: number): Evaluation {
  const { rank = "mase", loss = "absolute", length } = options, { horizon } = frame;
  // Stopped early, models are compared on the origins that all of them have finished.
  const common = Math.min(...rolled.map((r) => r.done)), even = rolled.map((r) => ({ ...r, done: common }));
  if (common === 0) throw new RangeError("compare: stopped before all models had forecast from the first origin");
  const tables = even.map((r) => scoreTable(r, frame, length)), overall = tables.map((rows) => rows[rows.length - 1]);
  const isGiven = (label: string): boolean => given.some((g) => g.label === label);
  const asked = even.map((_, i) => i).filter((i) => isGiven(even[i].label)), naiveAt = naiveIndexes(given, even);
  const losses = even.map((r) => lossesOf(r, frame, loss)), means = losses.map((l) => meanOverHorizon(l, common, horizon));
  const bestNaive = naiveAt.reduce<number>((a, b) => (a < 0 || overall[b][rank] < overall[a][rank] ? b : a), -1);
  const set = modelConfidenceSet(asked.map((i) => means[i]), { block: Math.max(horizon, Math.round(Math.cbrt(common))), seed: options.seed ?? 1 });
  // A model without a forecast somewhere was spared what the others had to forecast: it ranks behind them.
  const whole = Math.max(...asked.map((i) => overall[i].n)), key = (i: number): number => (overall[i].n < whole ? 1e300 : order(overall[i][rank]));
  const sorted = asked.map((i, k) => ({ i, k })).sort((a, b) => key(a.i) - key(b.i) || order(overall[a.i][rank]) - order(overall[b.i][rank]));
  const test = (i: number, j: number): ReturnType<typeof againstAll> => againstAll(even[i].label, even[j].label, means[i], means[j], horizon, common);
  const ranked = sorted.map(({ i, k }): RankedModel => {
    const model = given.find((g) => g.label === even[i].label)?.model ?? given[0].model, score = overall[i];
    const mine = key(i), before = sorted.filter((s) => key(s.i) < mine - 1e-12 * Math.abs(mine)).length;
    const { beatsNaive, sentence } = naiveVerdict(score, bestNaive, overall, rank, bestNaive >= 0 && bestNaive !== i ? test(i, bestNaive) : null);
    return { ...score, rank: before + 1, model, ...(isRule(model) ? {} : { fit: model, aic: model.aic, aicc: model.aicc, bic: model.bic }), setP: set.models[k].p, inSet: set.models[k].inside, beatsNaive, sentence };
  });
  const against = pairs(asked.concat(bestNaive >= 0 && !asked.includes(bestNaive) ? [bestNaive] : [])).flatMap(([i, j]) => [
    ...Array.from({ length: horizon }, (_, h) => againstAt(even[i].label, even[j].label, losses[i], losses[j], h, horizon, common)), test(i, j)]);
  const failures = even.flatMap((r) => r.failures.map((f) => ({ label: r.label, ...f })));
  const complete = done >= total, verdict = rankSentences(ranked, against, { rank, origins: common, horizon, complete, total: frame.at.length, failures: failures.length });
  return {
    models: ranked, best: ranked[0], rankedBy: rank, scores: asked.flatMap((i) => tables[i]), against, confidenceSet: set,
    naive: overall[Math.max(0, bestNaive)], naiveScores: tables[Math.max(0, bestNaive)], origins: frame.origins.slice(0, common), horizon, unit: frame.base.unit, name: frame.base.name, observed: frame.base,
    forecasts: asked.flatMap((i) => originForecasts(even[i], frame)), failures, complete, done, total, sentence: verdict.sentence,
    notes: given.some(({ model }) => !isRule(model) && Object.values(model.options.regressors ?? {}).some(isSeries)) ? [...verdict.notes, knownRegressors] : verdict.notes,
  };
}

function labelled(models: readonly Labelled[] | readonly Forecaster[] | Readonly<Record<string, Forecaster>>): Labelled[] {
  const list: Labelled[] = Array.isArray(models)
    ? (models as readonly (Labelled | Forecaster)[]).map((m) => ("model" in m && !("rule" in m) && !("sigma2" in m) ? m : { label: (m as Forecaster).label, model: m as Forecaster }))
    : Object.entries(models as Readonly<Record<string, Forecaster>>).map(([label, model]) => ({ label, model }));
  const counts = new Map<string, number>();
  return list.map(({ label, model }) => {
    const seen = (counts.get(label) ?? 0) + 1;
    counts.set(label, seen);
    return { label: seen > 1 ? `${label} (${seen})` : label, model };
  });
}

/** Season that errors are scaled by: a model's own, the spacing's usual one, or 1. */
function seasonOf(models: readonly Labelled[], frame: RollingFrame): number {
  const own = models.map(({ model }) => (isRule(model) ? (model.length ?? 0) : model.seasonLength)).find((length) => length > 1);
  const length = own ?? defaultSeasonLength(frame.base.every) ?? 1;
  return frame.at[0] >= 2 * length ? length : 1;
}

const knownRegressors = "Where a model has a series as regressor, its later values were taken as they turned out: the errors leave out that in practice they must be forecast too.";

const naiveLabel = "naive (added)", seasonalLabel = "seasonal naive (added)";

/** The naive rules that everything is measured against, where they were not asked for. */
function naiveRules(given: readonly Labelled[], frame: RollingFrame, length: number): Labelled[] {
  const base = slice(frame.base, 0, frame.base.n), has = (name: string): boolean => given.some(({ model }) => isRule(model) && model.rule === name);
  const added: Labelled[] = [];
  if (!has("naive")) added.push({ label: naiveLabel, model: rule.naive(base) });
  if (length > 1 && !has("seasonalNaive")) added.push({ label: seasonalLabel, model: rule.seasonalNaive(base, length) });
  return added;
}

function naiveIndexes(given: readonly Labelled[], rolled: readonly Rolled[]): number[] {
  return rolled.map((_, i) => i).filter((i) => {
    const { label } = rolled[i], model = given.find((g) => g.label === label)?.model;
    return label === naiveLabel || label === seasonalLabel || (model !== undefined && isRule(model) && (model.rule === "naive" || model.rule === "seasonalNaive"));
  });
}

/** One loss a forecast: of the median under absolute loss, of the mean under squared loss. */
function lossesOf(rolled: Rolled, { base, at, horizon }: RollingFrame, loss: Loss): Float64Array {
  return rolled.mean.map((mean, i) => {
    const y = base.values[at[Math.floor(i / horizon)] + (i % horizon) + 1];
    return loss === "squared" ? (y - mean) ** 2 : Math.abs(y - rolled.median[i]);
  });
}

function meanOverHorizon(losses: Float64Array, origins: number, horizon: number): Float64Array {
  return Float64Array.from({ length: origins }, (_, k) => {
    let sum = 0, count = 0;
    for (let h = 0; h < horizon; h++) { const x = losses[k * horizon + h]; if (!Number.isNaN(x)) { sum += x; count++; } }
    return count > 0 ? sum / count : NaN;
  });
}

function againstAt(a: string, b: string, lossA: Float64Array, lossB: Float64Array, h: number, horizon: number, origins: number): Against {
  const difference = Float64Array.from({ length: origins }, (_, k) => lossA[k * horizon + h] - lossB[k * horizon + h]);
  return tested(a, b, h + 1, difference, h + 1);
}

function againstAll(a: string, b: string, meanA: Float64Array, meanB: Float64Array, horizon: number, origins: number): Against {
  return tested(a, b, "all", Float64Array.from({ length: origins }, (_, k) => meanA[k] - meanB[k]), horizon);
}

/** Fewer origins than these say nothing that deserves a p-value. */
const fewestOrigins = 8;

function tested(a: string, b: string, horizon: number | "all", difference: Float64Array, steps: number): Against {
  const n = difference.filter((d) => !Number.isNaN(d)).length, needed = Math.max(fewestOrigins, 2 * steps);
  const test = lossDifferenceTest(difference, steps);
  const base = { a, b, horizon, meanDifference: test.meanDifference, n };
  if (test.status === "unavailable" && n >= needed) return { ...base, statistic: NaN, p: NaN, note: test.note };
  if (n < needed) return { ...base, statistic: NaN, p: NaN, note: `${n} origin${n === 1 ? " is" : "s are"} too few for a test ${steps} step${steps === 1 ? "" : "s"} ahead; at least ${needed} are wanted` };
  return { ...base, statistic: test.statistic, p: test.p };
}

function naiveVerdict(score: Score, naive: number, overall: readonly Score[], rank: RankBy, against: Against | null): { readonly beatsNaive: RankedModel["beatsNaive"]; readonly sentence: string } {
  if (naive < 0 || against === null) return { beatsNaive: "no", sentence: `${score.label} is itself the naive rule that the others have to beat.` };
  const other = overall[naive], name = other.label.replace(" (added)", ""), rule = name === "naive" ? "the naive rule" : `the naive rule "${name}"`;
  const words = `${rank.toUpperCase()} ${+score[rank].toPrecision(3)} against ${+other[rank].toPrecision(3)}`;
  if (!(score[rank] < other[rank])) return { beatsNaive: "no", sentence: `${score.label} does not beat naive: ${rule} forecast as well or better (${words}).` };
  if (against.p < 0.05 && against.meanDifference < 0) return { beatsNaive: "yes", sentence: `${score.label} beats ${rule} (${words}), by more than chance (p ${against.p < 0.001 ? "< 0.001" : `= ${against.p.toFixed(3)}`}).` };
  const reason = Number.isNaN(against.p) ? against.note ?? "no test is available" : `p = ${against.p.toFixed(2)}`;
  return { beatsNaive: "not shown", sentence: `${score.label} did better than ${rule} (${words}), but that it beats naive is not shown: ${reason}.` };
}

function originForecasts(rolled: Rolled, frame: RollingFrame): OriginForecast[] {
  const { base, at, horizon, origins } = frame;
  return Array.from({ length: rolled.done }, (_, k): OriginForecast => {
    const part = (x: Float64Array): Float64Array => x.slice(k * horizon, (k + 1) * horizon);
    return { label: rolled.label, origin: origins[k], times: timesAfter(frame, k), actual: base.values.slice(at[k] + 1, at[k] + 1 + horizon), mean: part(rolled.mean), median: part(rolled.median),
      bands: rolled.bands.map(({ level, low, high }) => ({ level, low: part(low), high: part(high) })) };
  });
}

function pairs(items: readonly number[]): [number, number][] {
  return items.flatMap((a, i) => items.slice(i + 1).map((b): [number, number] => [a, b]));
}

/** A score that is not available ranks last. */
const order = (score: number): number => (Number.isNaN(score) ? Infinity : score);
