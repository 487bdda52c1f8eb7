// The same model for another stretch of the data.

import { filterWith } from "../arma/filterWith.ts";
import { fit } from "../arma/fit.ts";
import { fitAt } from "../arma/fitAt.ts";
import type { Series } from "../series/series.ts";
import { applySteps, stepOf } from "../series/steps.ts";
import type { Forecaster } from "./model.ts";
import { between, reachOf } from "./reach.ts";
import { isRule, ruleFor } from "./rules.ts";

/** "fresh": estimated with nothing carried over; "refit": estimated again, the search starting from the model's own values; "held": those values kept. */
export type RefitHow = "fresh" | "refit" | "held";

/** The same model for another series.
 *  @param series  on the modelled scale with the model's steps; or in data units, and the steps are applied to it
 *  @param kept    `residuals: false` leaves those of a fit out, where it is estimated anew */
export function refit(model: Forecaster, series: Series, how: RefitHow = "refit", kept: { readonly residuals?: boolean } = {}): Forecaster {
  const own = model.series.steps;
  const stepped = series.steps.length === 0 && own.length > 0 ? applySteps(series, own.map(stepOf)) : series;
  if (!isRule(model)) {
    if (how === "fresh") return { ...fit({ ...model.options, series: stepped, window: undefined }, { ...kept, standardErrors: false }), label: model.label };
    return how === "held" ? filterWith(model, stepped) : fitAt(model, stepped, kept);
  }
  if (model.rule !== "combine") return ruleFor(model, stepped, how);
  const members = (model.members ?? []).map((member) => refit(member, series, how, kept));
  return { ...model, series: members[0].series, members };
}

export interface Stretch {
  /** Numbers of the first and last period of the data, on the common grid; nothing outside is seen. */
  readonly from: number; readonly to: number;
  readonly how: RefitHow;
  /** A longer version of the data than the model was made from. */
  readonly data?: Series;
}

/** A model for a stretch of the data that `source` was made from; its residuals are left out, since nobody reads those of many origins.
 *  @param parameters  where the search starts ("refit"), or what is kept ("held"): the model itself, or an earlier refit of it */
export function refitBetween(source: Forecaster, { from, to, how, data }: Stretch, parameters: Forecaster = source): Forecaster {
  if (isRule(source) && source.rule === "combine") {
    const given = isRule(parameters) ? parameters.members : undefined;
    const members = (source.members ?? []).map((member, i) => refitBetween(member, { from, to, how, data }, given?.[i] ?? member));
    return { ...source, series: members[0].series, members };
  }
  return refit(parameters, between(reachOf(source, data), from, to), how, { residuals: false });
}
