// A grid of orders, ranked by an information criterion on the same data.

import type { Fit, FitOptions, Lags } from "../arma/model.ts";
import { orderFitter } from "./orderFitter.ts";
import { orderText, ranked, type Criterion, type Grid, type GridFailure, type Order } from "./rankedGrid.ts";
import type { Hooks } from "./rolling.ts";

/** A number n tries 0 to n; a list tries each item, an item being whatever `fit` takes (a number of lags, or a list of lags). */
export type Tried = number | readonly Lags[];

export interface GridOptions extends Omit<FitOptions, "ar" | "ma" | "season"> {
  readonly ar?: Tried;
  readonly ma?: Tried;
  readonly season?: { readonly length?: number; readonly ar?: Tried; readonly ma?: Tried };
  readonly rank?: Criterion;
}

/** Fits every order of a grid to one series and ranks the fits.
 *  Orders that cannot be estimated are listed with the reason; so is every order when all fail.
 *  @throws RangeError where the grid is empty or too large */
export async function gridOfOrders(options: GridOptions, hooks: Hooks = {}): Promise<Grid> {
  const { ar, ma, season, rank = "aicc", ...rest } = options, fitted = orderFitter(rest, season, {}, hooks.recall);
  const orders = ordersOf(ar ?? 0, ma ?? 0, season), fits: { order: Order; fit: Fit }[] = [], failures: GridFailure[] = [];
  if (orders.length > 2000) throw new RangeError(`compare: the grid has ${orders.length} orders; more than 2,000 are not tried. Narrow it`);
  let tried = 0;
  for (const order of orders) {
    if (hooks.stopped?.()) break;
    const name = orderText(order);
    const found = fitted(order);
    if ("reason" in found) failures.push({ label: name, reason: found.reason });
    else if (Number.isFinite(found.fit[rank])) fits.push({ order, fit: found.fit });
    else failures.push({ label: name, reason: `${rank.toUpperCase()} is not available: ${found.fit.k} parameters on ${found.fit.n} observations` });
    tried++;
    hooks.progress?.(tried, orders.length, name);
    if (hooks.breathe) await hooks.breathe();
  }
  return ranked(fits, failures, rank, orders.length, tried);
}

/** Ranks fits by an information criterion.
 *  @throws RangeError where they are not of the same observations: criteria of different data or differences do not compare */
export function rankFits(fits: Readonly<Record<string, Fit>> | readonly Fit[], rank: Criterion = "aicc"): Grid {
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
