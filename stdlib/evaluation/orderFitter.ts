// One order of a grid or search, fitted, or the reason why it cannot be.

import { fit, type FitHow } from "../arma/fit.ts";
import type { Fit, FitOptions } from "../arma/model.ts";
import { smallerFits } from "../arma/smaller.ts";
import { contentKey, recallNothing, type Recall } from "./contentKey.ts";
import type { Order } from "./rankedGrid.ts";

export type Attempt = { readonly fit: Fit } | { readonly reason: string };

/** Each order's search also starts from what was found for smaller ones before it: a larger model is never worse than one it
 *  contains, and no smaller one is estimated twice.
 *  @param options  what all orders share; the label is each order's own
 *  @param season   left out: the orders have no seasonal part */
export function orderFitter(options: Omit<FitOptions, "ar" | "ma" | "season">, season: { readonly length?: number } | undefined, how: FitHow = {}, recall: Recall = recallNothing): (order: Order) => Attempt {
  const { label: _label, ...rest } = options, shared = contentKey([rest, season?.length, how]), smaller = smallerFits();
  return (order) => {
    const attempt = recall(`fit ${shared} ${contentKey(order)}`, (): Attempt => {
      try {
        const { ar, ma, seasonalAr, seasonalMa } = order;
        return { fit: fit({ ...rest, ar, ma, ...(season ? { season: { length: season.length, ar: seasonalAr, ma: seasonalMa } } : {}) }, { ...how, smaller }) };
      } catch (error) {
        // An order that the data cannot carry is an outcome; a fault of ours is not.
        if (!(error instanceof RangeError)) throw error;
        return { reason: error.message };
      }
    });
    if ("fit" in attempt) smaller.add(attempt.fit);
    return attempt;
  };
}
