// A search through seasonal orders that tries a few dozen of the hundreds a grid would.

import type { Fit, FitOptions } from "../arma/model.ts";
import { orderFitter } from "./orderFitter.ts";
import { orderText, ranked, type Criterion, type Grid, type GridFailure } from "./rankedGrid.ts";
import type { Hooks } from "./rolling.ts";

export interface StepwiseOptions extends Omit<FitOptions, "ar" | "ma" | "season"> {
  /** Largest orders that are tried: 5, 5, and 2 seasonal ones of each sort. */
  readonly ar?: number;
  readonly ma?: number;
  readonly season?: { readonly length?: number; readonly ar?: number; readonly ma?: number };
  readonly rank?: Criterion;
}

/** Cautions that keep the search from moving to a model: its place is at the edge of the region, or two factors say the same. */
const settingAside: readonly string[] = ["notConverged", "nearUnitRoot", "overDifferenced", "nearNonInvertible", "nearCancelling"];

/** One model on the way: what was tried, from where, and whether the search moved to it. */
export interface PathStep {
  readonly label: string;
  /** The criterion; NaN where the order could not be estimated. */
  readonly value: number;
  /** The model whose neighbour this is; null for the starts. */
  readonly from: string | null;
  readonly moved: boolean;
  /** Why the search would not move to it, whatever its criterion. */
  readonly setAside?: string;
}

export interface Stepwise extends Grid { readonly path: readonly PathStep[] }

/** p, q, P, Q. */
type Orders = readonly [number, number, number, number];

/** Starts from four usual models, moves to the best of them, then as long as it gains to a better neighbour: one order up or
 *  down, or p and q together, or P and Q together. Models on the edge of the region are set aside, with the reason. Finds a good order, not surely the best of the grid; the path is kept.
 *  Source: Hyndman & Khandakar (2008), section 3.2, for given differences. */
export async function stepwiseOrders(options: StepwiseOptions, hooks: Hooks = {}): Promise<Stepwise> {
  const { ar = 5, ma = 5, season, rank = "aicc", ...rest } = options, fitted = orderFitter(rest, season, { standardErrors: false }, hooks.recall), most: Orders = [ar, ma, season ? (season.ar ?? 2) : 0, season ? (season.ma ?? 2) : 0];
  for (const bound of most) if (!Number.isInteger(bound) || bound < 0) throw new RangeError(`stepwiseOrders: a largest order is ${bound}, expected a whole number from 0 on`);
  const tried = new Map<string, { readonly fit: Fit | null; readonly orders: Orders }>(), failures: GridFailure[] = [], path: PathStep[] = [];
  const attempt = async (orders: Orders): Promise<number> => {
    const asked = { ar: orders[0], ma: orders[1], seasonalAr: orders[2], seasonalMa: orders[3] };
    const made = fitted(asked), found = "fit" in made ? made.fit : null;
    if ("reason" in made) failures.push({ label: orderText(asked), reason: made.reason });
    tried.set(orders.join(), { fit: found, orders });
    hooks.progress?.(tried.size, 0, orderText(asked));
    if (hooks.breathe) await hooks.breathe();
    return found && Number.isFinite(found[rank]) ? found[rank] : NaN;
  };
  const state: { best: { readonly orders: Orders; readonly value: number; readonly label: string } | null } = { best: null };
  const stopped = (): boolean => hooks.stopped?.() ?? false;
  const look = async (orders: Orders, from: string | null): Promise<boolean> => {
    const value = await attempt(orders), label = tried.get(orders.join())?.fit?.label ?? orderText({ ar: orders[0], ma: orders[1], seasonalAr: orders[2], seasonalMa: orders[3] });
    const aside = tried.get(orders.join())?.fit?.notes.find((note) => settingAside.includes(note.code))?.text;
    const moved = aside === undefined && !Number.isNaN(value) && (state.best === null || value < state.best.value - 1e-9);
    path.push({ label, value, from, moved, ...(aside === undefined ? {} : { setAside: aside }) });
    if (moved) state.best = { orders, value, label };
    return moved;
  };
  for (const orders of startsWithin(most)) if (!stopped()) await look(orders, null);
  for (let here = state.best; here !== null && !stopped(); here = state.best) {
    for (const orders of neighbours(here.orders, most)) {
      // The first better neighbour is taken: fewer fits than trying all of them, and mostly the same end.
      if (!tried.has(orders.join()) && !stopped() && await look(orders, here.label)) break;
    }
    if (state.best === here) break;
  }
  const all = [...tried.values()].flatMap(({ fit: f, orders }) => (f && Number.isFinite(f[rank]) ? [{ order: { ar: orders[0], ma: orders[1], seasonalAr: orders[2], seasonalMa: orders[3] }, fit: f }] : []));
  const sound = all.filter(({ fit: f }) => !f.notes.some((note) => settingAside.includes(note.code))), fits = sound.length > 0 ? sound : all;
  for (const { fit: f } of all) {
    const aside = f.notes.find((note) => settingAside.includes(note.code));
    if (sound.length > 0 && aside) failures.push({ label: f.label, reason: `set aside: ${aside.text}` });
  }
  const complete = !stopped(), whole = most.reduce((product, n) => product * (n + 1), 1), grid = ranked(fits, failures, rank, complete ? tried.size : tried.size + 1, tried.size);
  const remark = `A stepwise search tried ${tried.size} of ${whole} orders: a better one may lie off its path.`;
  return { ...grid, complete, asked: tried.size, notes: [...grid.notes, remark], path };
}

function startsWithin(most: Orders): Orders[] {
  const starts: Orders[] = [[2, 2, 1, 1], [0, 0, 0, 0], [1, 0, 1, 0], [0, 1, 0, 1]], seen = new Map<string, Orders>();
  for (const orders of starts) {
    const inside = orders.map((order, i) => Math.min(order, most[i])) as unknown as Orders;
    seen.set(inside.join(), inside);
  }
  return [...seen.values()];
}

function neighbours([p, q, P, Q]: Orders, most: Orders): Orders[] {
  const moves: Orders[] = [[0, 0, -1, 0], [0, 0, 0, -1], [0, 0, 1, 0], [0, 0, 0, 1], [0, 0, -1, -1], [0, 0, 1, 1], [-1, 0, 0, 0], [0, -1, 0, 0], [1, 0, 0, 0], [0, 1, 0, 0], [-1, -1, 0, 0], [1, 1, 0, 0]];
  return moves.map(([a, b, c, d]): Orders => [p + a, q + b, P + c, Q + d]).filter((orders) => orders.every((order, i) => order >= 0 && order <= most[i]));
}
