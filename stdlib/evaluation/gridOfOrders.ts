// A grid of orders, ranked by an information criterion on the same data.

import { fit } from "../arma/fit.ts";
import type { Fit, FitOptions, Lags } from "../arma/model.ts";
import type { Hooks } from "./rolling.ts";

/** A number n tries 0 to n; a list tries each item, an item being whatever `fit` takes (a number of lags, or a list of lags). */
export type Tried = number | readonly Lags[];

export interface GridOptions extends Omit<FitOptions, "ar" | "ma" | "season"> {
  readonly ar?: Tried;
  readonly ma?: Tried;
  readonly season?: { readonly length?: number; readonly ar?: Tried; readonly ma?: Tried };
  readonly rank?: "aic" | "aicc" | "bic";
}

export interface GridRow {
  readonly label: string;
  readonly fit: Fit;
  readonly ar: Lags; readonly ma: Lags; readonly seasonalAr: Lags; readonly seasonalMa: Lags;
  readonly aic: number; readonly aicc: number; readonly bic: number;
  readonly logLikelihood: number; readonly k: number; readonly n: number;
  /** Of the criterion that ranks: how far above the best, and the Akaike weight exp(-difference / 2) as a share of all. */
  readonly difference: number; readonly weight: number;
  /** 1 is the best. */
  readonly rank: number;
  /** Within 2 of the best: as good as it. */
  readonly tied: boolean;
  /** Cautions of the fit in words (not converged, root near the unit circle, factors that nearly cancel). */
  readonly cautions: readonly string[];
}

export interface GridFailure { readonly label: string; readonly reason: string }

export interface Grid {
  readonly models: readonly GridRow[];
  readonly best: GridRow | null;
  readonly rankedBy: "aic" | "aicc" | "bic";
  readonly failures: readonly GridFailure[];
  /** Orders asked for, and tried before the work was stopped, if it was. */
  readonly asked: number; readonly tried: number; readonly complete: boolean;
  readonly sentence: string;
  readonly notes: readonly string[];
}

interface Order { readonly ar: Lags; readonly ma: Lags; readonly seasonalAr: Lags; readonly seasonalMa: Lags }

/** Fits every order of a grid to one series and ranks the fits.
 *  Orders that cannot be estimated are listed with the reason; so is every order when all fail.
 *  @throws RangeError where the grid is empty or too large */
export async function gridOfOrders(options: GridOptions, hooks: Hooks = {}): Promise<Grid> {
  const { ar, ma, season, rank = "aicc", label: _label, ...rest } = options;
  const orders = ordersOf(ar ?? 0, ma ?? 0, season), fits: { order: Order; fit: Fit }[] = [], failures: GridFailure[] = [];
  if (orders.length > 2000) throw new RangeError(`compare: the grid has ${orders.length} orders; more than 2,000 are not tried. Narrow it`);
  let tried = 0;
  for (const order of orders) {
    if (hooks.stopped?.()) break;
    const name = orderText(order);
    try {
      const found = fit({ ...rest, ar: order.ar, ma: order.ma, ...(season ? { season: { length: season.length, ar: order.seasonalAr, ma: order.seasonalMa } } : {}) });
      const value = found[rank];
      if (Number.isFinite(value)) fits.push({ order, fit: found });
      else failures.push({ label: name, reason: `${rank.toUpperCase()} is not available: ${found.k} parameters on ${found.n} observations` });
    } catch (error) {
      // An order that the data cannot carry is an outcome; a fault of ours is not.
      if (!(error instanceof RangeError)) throw error;
      failures.push({ label: name, reason: error.message });
    }
    tried++;
    hooks.progress?.(tried, orders.length, name);
    if (hooks.breathe) await hooks.breathe();
  }
  return ranked(fits, failures, rank, orders.length, tried);
}

/** Ranks fits by an information criterion.
 *  @throws RangeError where they are not of the same observations: criteria of different data or differences do not compare */
export function rankFits(fits: Readonly<Record<string, Fit>> | readonly Fit[], rank: "aic" | "aicc" | "bic" = "aicc"): Grid {
  const list = Array.isArray(fits) ? (fits as readonly Fit[]).map((f) => [f.label, f] as const) : Object.entries(fits as Readonly<Record<string, Fit>>);
  if (list.length === 0) throw new RangeError("compare: give at least one fit");
  const [firstLabel, first] = list[0], differences = (f: Fit): string => f.series.steps.map((s) => ("lag" in s ? `${s.step}(${s.lag})` : s.step)).join(", ") || "no steps";
  for (const [label, other] of list) {
    if (differences(other) !== differences(first)) throw new RangeError(`compare: ${firstLabel} was fitted after the steps ${differences(first)}, ${label} after ${differences(other)}. Their likelihoods are of different data, and no criterion ranks across that; compare them at held-out origins, with rank: "mase"`);
    const same = other.series.n === first.series.n && other.series.start === first.series.start && other.series.values.every((v, t) => v === first.series.values[t] || (Number.isNaN(v) && Number.isNaN(first.series.values[t])));
    if (!same) throw new RangeError(`compare: ${firstLabel} was fitted to ${first.series.n} values from ${first.series.start}, ${label} to ${other.series.n} from ${other.series.start}. A criterion compares models of the same observations only; give them one window`);
  }
  const rows = list.map(([label, f]) => ({ order: { ar: f.options.ar ?? 0, ma: f.options.ma ?? 0, seasonalAr: f.options.season?.ar ?? 0, seasonalMa: f.options.season?.ma ?? 0 }, fit: { ...f, label } }));
  return ranked(rows, [], rank, rows.length, rows.length);
}

function ranked(fits: readonly { readonly order: Order; readonly fit: Fit }[], failures: readonly GridFailure[], rank: "aic" | "aicc" | "bic", asked: number, tried: number): Grid {
  const sorted = [...fits].sort((a, b) => a.fit[rank] - b.fit[rank]), least = sorted.length > 0 ? sorted[0].fit[rank] : NaN;
  const shares = sorted.map(({ fit: f }) => Math.exp((least - f[rank]) / 2)), all = shares.reduce((a, b) => a + b, 0);
  const models = sorted.map(({ order, fit: f }, i): GridRow => ({
    label: f.label, fit: f, ...order, aic: f.aic, aicc: f.aicc, bic: f.bic, logLikelihood: f.logLikelihood, k: f.k, n: f.n,
    difference: f[rank] - least, weight: shares[i] / all, rank: 1 + sorted.filter((s) => s.fit[rank] < f[rank]).length, tied: f[rank] - least <= 2,
    cautions: f.notes.filter((note) => note.tone === "caution").map((note) => note.text),
  }));
  return { models, best: models[0] ?? null, rankedBy: rank, failures, asked, tried, complete: tried === asked, ...words(models, failures, rank, asked, tried) };
}

function words(models: readonly GridRow[], failures: readonly GridFailure[], rank: string, asked: number, tried: number): { readonly sentence: string; readonly notes: readonly string[] } {
  const name = rank.toUpperCase().replace("AICC", "AICc"), notes: string[] = [];
  if (tried < asked) notes.push(`Stopped early: ${tried} of ${asked} orders were tried.`);
  if (failures.length > 0) notes.push(`${failures.length} of ${tried} orders could not be estimated; the reasons are listed.`);
  if (models.length > 1) notes.push(`${models.length} models were tried: the best of many looks better than it is, so check it on data that were not used to choose it.`);
  const [best] = models;
  if (!best) return { sentence: `None of ${tried} orders could be estimated.`, notes };
  const ties = models.filter((m) => m.tied && m !== best);
  const also = ties.length === 0 ? "no other comes within 2 of it" : `${ties.slice(0, 4).map((m) => m.label).join(", ")}${ties.length > 4 ? ` and ${ties.length - 4} more` : ""} ${ties.length === 1 ? "is" : "are"} within 2 of it, which is a tie`;
  if (best.cautions.length > 0) notes.push(`The best has a caution: ${best.cautions[0]}`);
  return { sentence: `Of ${models.length} model${models.length === 1 ? "" : "s"}, ${best.label} has the smallest ${name} (${best.fit[rank as "aic"].toFixed(1)}); ${also}.`, notes };
}

function ordersOf(ar: Tried, ma: Tried, season: GridOptions["season"]): Order[] {
  const list = (tried: Tried, what: string): readonly Lags[] => {
    if (typeof tried !== "number") {
      if (tried.length === 0) throw new RangeError(`compare: ${what} is an empty list; give a number n to try 0 to n, or a list of orders`);
      return tried;
    }
    if (!Number.isInteger(tried) || tried < 0) throw new RangeError(`compare: ${what} is ${tried}, expected a whole number from 0 on`);
    return Array.from({ length: tried + 1 }, (_, i) => i);
  };
  return list(ar, "ar").flatMap((a) => list(ma, "ma").flatMap((m) => list(season?.ar ?? 0, "season.ar").flatMap((sa) => list(season?.ma ?? 0, "season.ma").map((sm): Order => ({ ar: a, ma: m, seasonalAr: sa, seasonalMa: sm })))));
}

function orderText({ ar, ma, seasonalAr, seasonalMa }: Order): string {
  const text = (lags: Lags): string => (typeof lags === "number" ? String(lags) : `[${lags.join(", ")}]`);
  const seasonal = text(seasonalAr) === "0" && text(seasonalMa) === "0" ? "" : `, season ar ${text(seasonalAr)}, ma ${text(seasonalMa)}`;
  return `ar ${text(ar)}, ma ${text(ma)}${seasonal}`;
}
