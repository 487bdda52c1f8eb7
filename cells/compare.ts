// The kind that ranks models: a grid of orders by a criterion, or fits and rules by their errors at held-out origins.

import { defaultSeasonLength, gridOfOrders, rankFits, rollingOrigins, stepwiseOrders, type Fit, type Forecaster, type Grid, type GridOptions, type Hooks, type Lags, type Regressor, type Season, type Series, type Stepwise } from "../stdlib/index.ts";
import { OptionError, type Kind, type OptionTable, type RunContext } from "./kind.ts";
import { compareParts, type Comparison } from "./parts/compareParts.ts";
import { labelledModels } from "./parts/labelledModels.ts";
import { asOptionError, highestLag, needVaryingSeries } from "./parts/needs.ts";
import { usualHorizon, usualOrigins } from "./parts/origins.ts";

type Tried = number | readonly Lags[];

export interface CompareCell {
  readonly series?: unknown;
  readonly ar?: Tried;
  readonly ma?: Tried;
  readonly season?: number | Season | readonly (Season | null | 0)[];
  readonly search?: "grid" | "stepwise";
  readonly mean?: boolean;
  readonly regressors?: Readonly<Record<string, Regressor>>;
  readonly models?: unknown;
  readonly rank?: string;
  readonly origins?: number;
  readonly horizon?: number;
  readonly training?: "expanding" | "sliding";
  readonly refit?: boolean | number;
  readonly window?: { readonly from?: string; readonly to?: string };
  readonly levels?: readonly number[];
  readonly loss?: "absolute" | "squared";
  readonly data?: Series;
}

const criteria = ["aic", "aicc", "bic"] as const;
const errors = ["mase", "mae", "rmse", "rmsse", "mape", "smape", "crps", "pinball"] as const;
type Criterion = (typeof criteria)[number];
type ErrorMeasure = (typeof errors)[number];

/** Models of a grid that go on to held-out origins, where it is ranked by errors. */
const mostFromGrid = 12;
const mostForecasts = 500_000;

const compareOptions: OptionTable = {
  series: { type: "series", sentence: "For a grid of orders: the series that every order is fitted to.", example: "steady" },
  ar: { type: "any", sentence: "For a grid: a number n tries 0 to n autoregressive lags; a list tries each of its items; none unless given. For a stepwise search the largest number of lags (5).", example: "2" },
  ma: { type: "any", sentence: "For a grid: a number n tries 0 to n moving-average lags; a list tries each of its items; none unless given. For a stepwise search the largest number of lags (5).", example: "2" },
  season: { type: "any", sentence: "For a grid: the season of every model, as in fit; a number n tries 0 to n seasonal lags of both sorts; a list tries each of its items, 0 being none. For a stepwise search its length and the largest orders (2 of both).", example: "[0, {ma: 1}]" },
  search: { type: { oneOf: ["grid", "stepwise"] }, default: "grid", sentence: "For orders: try all of the grid, or start from four usual models and move to better neighbours, which tries a few dozen of hundreds." },
  mean: { type: "boolean", sentence: "For a grid: whether the models have a mean; as in fit unless given." },
  regressors: { type: "object", sentence: "For a grid: regressors by name, as in fit." },
  models: { type: "any", sentence: "Fits and rules to compare, as {label: model} or a list; all of one loaded series.", example: "[airline, rule.naive(crossings)]" },
  rank: { type: { oneOf: [...criteria, ...errors] }, sentence: "What ranks: an information criterion (aicc unless given, for a grid) or an error at held-out origins (mase unless given, for models)." },
  origins: { type: "integer", min: 1, max: 2000, sentence: "How many last origins to forecast from, one period apart; a quarter of the data, at most 36, unless given." },
  horizon: { type: "integer", min: 1, max: 1000, sentence: "How many periods ahead of each origin; a season, at most 12, unless given." },
  training: { type: { oneOf: ["expanding", "sliding"] }, default: "expanding", sentence: "What a model sees at an origin: all data up to it, or as many periods as the first origin had." },
  refit: { type: { anyOf: ["boolean", "integer"] }, default: true, min: 1, sentence: "Whether to estimate again at every origin; a number estimates again at every so many." },
  window: { type: "window", sentence: "Bounds of the data that are used, both ends included." },
  levels: { type: { listOf: "level" }, default: [0.5, 0.9], sentence: "Confidence of the bands whose coverage is counted." },
  loss: { type: { oneOf: ["absolute", "squared"] }, default: "absolute", sentence: "Loss of the tests between two models." },
  data: { type: "series", sentence: "The whole loaded series, where the models were made from a part of it: origins are then taken from its end." },
};

/** Ranks models, and says when the best is no better than a naive rule. */
export const compare: Kind<CompareCell, Comparison> = {
  name: "compare",
  sentence: "Ranks models: a grid of orders by a criterion, or fits and rules by their errors at held-out origins.",
  options: compareOptions,
  body: "options",
  callable: true,
  example: "models: [airline, rule.seasonalNaive(crossings)]\norigins: 24\nhorizon: 12",
  run: (options, context) => runCompare(options, context),
  show: result => compareParts(result),
};

async function runCompare(options: CompareCell, context: RunContext): Promise<Comparison> {
  const given = Object.fromEntries(Object.entries(options).filter(([, value]) => value !== null && value !== undefined)) as CompareCell;
  try {
    if (given.models !== undefined) return await compareModels(given, context);
    if (given.series !== undefined) return await compareOrders(given, context);
  } catch (error) {
    throw asOptionError(error);
  }
  throw new OptionError(null, "compare needs either `models` (fits and rules) or `series` with orders to try, such as ar: 2 and ma: 2");
}

async function compareModels(options: CompareCell, context: RunContext): Promise<Comparison> {
  if (options.series !== undefined) throw new OptionError("series", "compare takes either `models` or a grid over `series`, not both; leave one of them out");
  const models = labelledModels(options.models, context.source.models);
  const { rank = "mase" } = options;
  if (isCriterion(rank)) {
    const rule = models.find(({ model }) => "rule" in model);
    if (rule !== undefined) throw new OptionError("rank", `${rule.label} is a rule and has no likelihood, so ${rank} cannot rank it; rank by an error at held-out origins, such as mase`);
    return asCriterion(rankFits(Object.fromEntries(models.map(({ label, model }) => [label, model as Fit])), rank));
  }
  return evaluated(models, rank as ErrorMeasure, options, context);
}

async function compareOrders(options: CompareCell, context: RunContext): Promise<Comparison> {
  const series = needVaryingSeries(options.series, 8, "a grid of orders");
  checkTried(options.ar, "ar");
  checkTried(options.ma, "ma");
  const { rank = "aicc" } = options;
  const grid = await gridOf(options, series, isCriterion(rank) ? rank : "aicc", context);
  if (isCriterion(rank) || context.stopped()) return asCriterion(grid);
  if (grid.best === null) throw new OptionError(null, `none of ${grid.asked} orders could be estimated; the first said: ${grid.failures[0]?.reason ?? "nothing"}`);
  const kept = grid.models.slice(0, mostFromGrid);
  if (grid.models.length > kept.length) context.note(`The ${kept.length} orders of smallest AICc went on to the held-out origins, of ${grid.models.length} that could be estimated. The criterion saw the held-out data when it chose them.`);
  return evaluated(kept.map(row => ({ label: row.label, model: row.fit })), rank as ErrorMeasure, options, context);
}

/** A list of seasons is several grids, ranked together. */
async function gridOf(options: CompareCell, series: Series, rank: Criterion, context: RunContext): Promise<Grid | Stepwise> {
  const { ar, ma, mean, regressors, window } = options;
  const common = { series, ar, ma, rank, ...(mean === undefined ? {} : { mean }), ...(regressors === undefined ? {} : { regressors }), ...(window === undefined ? {} : { window }) };
  const hooks = hooksOf(context);
  if (options.search === "stepwise") {
    return stepwiseOrders({ ...common, ar: largest(ar, "ar"), ma: largest(ma, "ma"), ...largestSeason(options.season, series) }, hooks);
  }
  const seasons = seasonsOf(options.season);
  const grids: Grid[] = [];
  for (const season of seasons) {
    if (grids.length > 0 && context.stopped()) break;
    grids.push(await gridOfOrders({ ...common, ...(season === undefined ? {} : { season }) }, {
      ...hooks, progress: (done, total, what) => { context.progress(grids.length * total + done, seasons.length * total, what); },
    }));
  }
  return seasons.length === 1 ? grids[0] : merged(grids, rank, seasons.length);
}

/** @param askedGrids  how many grids there were to be: all of one size */
function merged(grids: readonly Grid[], rank: Criterion, askedGrids: number): Grid {
  const failures = grids.flatMap(grid => grid.failures);
  const fits = new Map(grids.flatMap(grid => grid.models).map(row => [row.label, row.fit]));
  const asked = askedGrids * grids[0].asked, tried = grids.reduce((sum, grid) => sum + grid.tried, 0), complete = tried === asked;
  const early = complete ? [] : [`Stopped early: ${tried} of ${asked} orders were tried.`];
  if (fits.size === 0) return { ...grids[0], failures, asked, tried, complete, sentence: `None of ${tried} orders could be estimated.`, notes: early };
  const all = rankFits(Object.fromEntries(fits), rank);
  return { ...all, failures, asked, tried, complete, notes: [...early, ...all.notes, ...(failures.length > 0 ? [`${failures.length} of ${tried} orders could not be estimated; the reasons are listed.`] : [])] };
}

/** More seasonal lags than anybody tries: a larger number was meant as the season's length. */
const mostSeasonalLags = 3;

/** A number n is a grid of 0 to n seasonal lags of both sorts; anything else stands for the orders that a fit would read in it. */
function seasonsOf(season: CompareCell["season"]): readonly GridOptions["season"][] {
  if (season === undefined) return [undefined];
  if (typeof season === "number") {
    if (!Number.isInteger(season) || season < 0) throw new OptionError("season", `season is ${season}; a number n tries 0 to n seasonal lags, and an object such as {ma: 1} is one season to try`);
    if (season > mostSeasonalLags) throw new OptionError("season", `season: ${season} would try up to ${season} seasonal lags; a season of ${season} periods is {length: ${season}, ma: 1}`);
    return [{ ar: season, ma: season }];
  }
  if (!Array.isArray(season)) return [oneSeason(season)];
  if (season.length === 0) throw new OptionError("season", "season is an empty list; give at least one item, such as {ma: 1}");
  return (season as readonly unknown[]).map(oneSeason);
}

/** The largest order of a stepwise search. */
function largest(tried: unknown, option: string): number | undefined {
  if (tried === undefined) return undefined;
  if (typeof tried === "number" && Number.isInteger(tried) && tried >= 0) return tried;
  throw new OptionError(option, `in a stepwise search ${option} is the largest number of lags, such as 5; found ${Array.isArray(tried) ? "a list" : String(tried)}`);
}

/** A series with a season is searched with seasonal orders unless told otherwise by 0. */
function largestSeason(season: CompareCell["season"], series: Series): { readonly season?: { readonly length?: number; readonly ar?: number; readonly ma?: number } } {
  const length = defaultSeasonLength(series.every);
  if (season === undefined) return length !== null && length > 1 && series.n >= 3 * length ? { season: {} } : {};
  if (season === 0) return {};
  if (typeof season === "number") return { season: { ar: season, ma: season } };
  if (Array.isArray(season) || typeof season !== "object") throw new OptionError("season", "in a stepwise search season gives the largest seasonal orders, as in {length: 12, ar: 2, ma: 2}, or 0 for none");
  const { length: asked, ar, ma } = season as Season;
  return { season: { ...(asked === undefined ? {} : { length: asked }), ar: largest(ar, "season"), ma: largest(ma, "season") } };
}

function oneSeason(item: unknown): GridOptions["season"] {
  if (item === null || item === 0) return undefined;
  if (typeof item !== "object" || Array.isArray(item)) throw new OptionError("season", `a season to try is an object such as {ma: 1}, or 0 for none; found ${String(item)}`);
  const { length, ar = 0, ma = 0 } = item as Season;
  highestLag(ar, "season");
  highestLag(ma, "season");
  return { ...(length === undefined ? {} : { length }), ar: [ar], ma: [ma] };
}

async function evaluated(models: readonly { readonly label: string; readonly model: Forecaster }[], rank: ErrorMeasure, options: CompareCell, context: RunContext): Promise<Comparison> {
  const { training, refit, window, levels, loss, data } = options;
  const first = models[0].model.series;
  const whole = data ?? first.steps[0]?.before ?? first;
  const horizon = options.horizon ?? usualHorizon(whole.every, whole.n);
  const origins = options.origins ?? usualOrigins(whole.n, horizon);
  if (origins * horizon * models.length > mostForecasts) throw new OptionError("origins", `${origins} origins, ${horizon} periods ahead, of ${models.length} models are ${origins * horizon * models.length} forecasts, more than the ${mostForecasts} that are kept; ask for fewer origins or a shorter horizon`);
  const result = await rollingOrigins(models, {
    origins, horizon, rank, ...(training === undefined ? {} : { training }), ...(refit === undefined ? {} : { refit }), ...(window === undefined ? {} : { window }),
    ...(levels === undefined ? {} : { levels }), ...(loss === undefined ? {} : { loss }), ...(data === undefined ? {} : { data }),
  }, hooksOf(context));
  return { ...result, how: "origins", every: whole.every };
}

function hooksOf({ progress, breathe, stopped, recall, ahead }: RunContext): Hooks {
  return { progress, breathe, stopped, recall, ahead: ({ shared, items }) => { ahead("estimates", shared, items); } };
}

function asCriterion(grid: Grid): Comparison {
  return { ...grid, how: "criterion", scores: [], against: [] };
}

function isCriterion(rank: string): rank is Criterion {
  return (criteria as readonly string[]).includes(rank);
}

function checkTried(tried: Tried | undefined, option: string): void {
  if (tried === undefined) return;
  if (typeof tried === "number") { highestLag(tried, option); return; }
  if (!Array.isArray(tried)) throw new OptionError(option, `${option} takes a number n, to try 0 to n, or a list of orders to try; found ${String(tried)}`);
  for (const item of tried as readonly Lags[]) highestLag(item, option);
}
