// A fit's parameters put to its own data again: what prediction, interpolation and refiltering start from.

import { coefficientsOf } from "./coefficients.ts";
import { filterLevels, type Filtered } from "./filter.ts";
import { levelModel, type LevelModel } from "./levelModel.ts";
import type { Fit } from "./model.ts";
import { integrated } from "./numbers.ts";
import { prepare, type Prepared } from "./prepare.ts";

export interface Known {
  readonly prepared: Prepared;
  readonly model: LevelModel;
  readonly x: Float64Array;
  /** First observed level (or 0). */
  readonly from: number;
  /** Levels from there to the end of the series less regression and mean; NaN in gaps. */
  readonly rest: Float64Array;
  /** What was subtracted. */
  readonly part: Float64Array;
}

/** @param whole  from the first level on, observed or not
 *  @throws RangeError when the fit's autoregressive side is not stationary */
export function knownOf(fit: Fit, whole = false): Known {
  const prepared = prepare({ ...fit.options, series: fit.series, window: undefined, hold: undefined });
  const x = coefficientsOf(fit, prepared.shape);
  const model = levelModel(prepared.shape, x, prepared.delta);
  if (model === null) throw new RangeError(`${fit.label}: the autoregressive side is not stationary, so nothing can be predicted from it; difference the series, or use method: "exact"`);
  const { levels, columns, names } = prepared;
  const from = whole ? 0 : Math.max(0, levels.values.findIndex(v => !Number.isNaN(v)));
  const part = new Float64Array(levels.n - from);
  names.forEach((name, j) => { const beta = fit.beta[name] ?? 0; if (beta !== 0) for (let t = 0; t < part.length; t++) part[t] += beta * columns[j][from + t]; });
  if (fit.mean !== 0) { const z = integrated(prepared.delta, part.length); for (let t = 0; t < part.length; t++) part[t] += fit.mean * z[t]; }
  const rest = Float64Array.from(part, (v, t) => levels.values[from + t] - v);
  return { prepared, model, x, from, rest, part };
}

/** The states and one-step errors of the series under its known parameters, by the exact filter (filter.ts). */
export function filtered(known: Known): Filtered {
  return filterLevels(known.model, [known.rest]);
}
