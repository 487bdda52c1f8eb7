// Filling of missing values.

import { autoregressiveFill } from "./autoregressiveFill.ts";
import type { Series } from "./series.ts";

export type FillHow = "linear" | "previous" | "model";

/** Values of a series with the missing ones filled: on a line between the neighbours ("linear"; at an end the nearest value),
 *  by the value before ("previous"; none at the start), or by the conditional mean under an autoregression ("model").
 *  @throws RangeError where nothing is observed */
export function filled(series: Series, how: FillHow): Float64Array {
  const { values } = series;
  if (values.every(Number.isNaN)) throw new RangeError(`fill: no value of ${series.name || "the series"} is observed`);
  switch (how) {
    case "linear": return onALine(values);
    case "previous": return fromBefore(values);
    case "model": return autoregressiveFill(values, series.every);
    default: throw new RangeError(`fill: "${String(how)}" is no way of filling; use "linear", "previous" or "model"`);
  }
}

function fromBefore(values: Float64Array): Float64Array {
  const result = values.slice();
  for (let t = 1; t < result.length; t++) if (Number.isNaN(result[t])) result[t] = result[t - 1];
  return result;
}

function onALine(values: Float64Array): Float64Array {
  const result = values.slice();
  let known = -1;
  for (let t = 0; t <= values.length; t++) {
    if (t < values.length && Number.isNaN(values[t])) continue;
    for (let k = known + 1; k < t; k++) {
      if (known < 0) result[k] = values[t];
      else if (t === values.length) result[k] = values[known];
      else result[k] = values[known] + ((values[t] - values[known]) * (k - known)) / (t - known);
    }
    known = t;
  }
  return result;
}
