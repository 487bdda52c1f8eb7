// Estimates of one model at many origins, each from the data up to it and nothing else.

import type { Series } from "../series/series.ts";
import { stepOf } from "../series/steps.ts";
import type { Forecaster } from "../forecast/model.ts";
import { baseOf, firstIndex, reachOf } from "../forecast/reach.ts";
import { refitBetween } from "../forecast/refit.ts";
import { isRule } from "../forecast/rules.ts";
import { withData, withoutData } from "../forecast/withoutData.ts";
import { contentKey, type Recall } from "./contentKey.ts";

/** Numbers of the first and last period of the data that are seen, on the common grid. */
export interface Seen { readonly from: number; readonly to: number }

export interface Estimates {
  /** The model for a stretch of the data. @throws RangeError where it cannot be estimated */
  at(seen: Seen): Forecaster;
  /** The estimate of an earlier stretch, put to the data of another. @throws RangeError as above */
  held(parameters: Seen, seen: Seen): Forecaster;
  /** Stands for all that the estimate of a stretch is made from. */
  key(seen: Seen): string;
  /** What is recalled of a stretch, under `recalledAs` of it: the estimate without its data. */
  estimate(seen: Seen): Estimated;
  recalledAs(seen: Seen): string;
}

export interface EstimatesOptions {
  /** A longer version of the data than the model was made from. */
  readonly data?: Series;
  /** Whether the start of the stretch moves with its end. */
  readonly slides: boolean;
  /** The earliest period that may be seen. */
  readonly earliest: number;
  readonly recall: Recall;
}

/** Every so many periods of the calendar a search starts from nothing (an anchor), and the ones after it start from what it
 *  found. So an estimate hangs on the data up to its origin alone, not on which other origins were asked for, and serves again
 *  when these change. A start from nothing costs up to eight times one from nearby: anchors are few. */
const anchorEvery = 24;
/** The share of an origin's data that its anchor must have had to be a start worth taking. */
const leastShare = 0.75;

/** What was found, or why nothing was. */
export type Estimated = { readonly model: Forecaster } | { readonly reason: string };

/** @param model  what is estimated again, with its orders, regressors and held coefficients */
export function estimatesOf(model: Forecaster, { data, slides, earliest, recall }: EstimatesOptions): Estimates {
  const reach = reachOf(model, data), base = baseOf(reach), first = firstIndex(base), asked = contentKey(specOf(model, data));
  const key = ({ from, to }: Seen): string => `${asked} ${from} ${contentKey(base.values.subarray(Math.max(0, from - first), to + 1 - first))}`;
  const recalledAs = (seen: Seen): string => `estimate ${key(seen)}`;
  const found = (seen: Seen): Estimated => recall(recalledAs(seen), () => {
    const near = nearTo(seen);
    return attempt(() => refitBetween(model, { ...seen, how: near === null ? "fresh" : "refit", data }, near ?? model));
  });
  const nearTo = ({ from, to }: Seen): Forecaster | null => {
    const back = ((to % anchorEvery) + anchorEvery) % anchorEvery;
    const anchor = { from: slides ? Math.max(earliest, from - back) : from, to: to - back };
    if (back === 0 || anchor.to - anchor.from + 1 < leastShare * (to - from + 1)) return null;
    const there = found(anchor);
    return "model" in there ? there.model : null;
  };
  const parametersOf = (seen: Seen): Forecaster => {
    const there = found(seen);
    if ("reason" in there) throw new RangeError(there.reason);
    return there.model;
  };
  return {
    key, recalledAs, estimate: found,
    at: (seen) => withData(parametersOf(seen), model, seen, data),
    held: (parameters, seen) => refitBetween(model, { ...seen, how: "held", data }, parametersOf(parameters)),
  };
}

/** A model that cannot be estimated on a short stretch is an outcome of the comparison; a fault of ours is not. */
function attempt(estimate: () => Forecaster): Estimated {
  try {
    return { model: withoutData(estimate()) };
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    return { reason: error.message };
  }
}

/** What is asked of a model, apart from the data up to an origin. */
function specOf(model: Forecaster, data: Series | undefined): unknown {
  const reach = reachOf(model, data), { every } = reach, frame = { every, first: firstIndex(reach), steps: reach.steps.map(stepOf) };
  if (!isRule(model)) {
    const { series: _series, window: _window, label: _label, ...options } = model.options;
    return { ...frame, ...options };
  }
  const { rule, length, trend, season, damped, error, hold, members } = model;
  return { ...frame, rule, length, trend, season, damped, error, hold, members: members?.map((member) => specOf(member, data)) };
}
