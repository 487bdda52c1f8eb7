// A regularly spaced series of numbers: the one value that every method here takes or returns.

import { milliseconds, timesFrom } from "./calendar.ts";
import type { AppliedStep } from "./steps.ts";

/** One observation a period, in time order. `NaN` in `values` is missing data and nothing else. */
export interface Series {
  readonly name: string;
  /** Unit of the values as a reader should see it ("vehicles"); "" when not known. */
  readonly unit: string;
  /** Spacing as an ISO 8601 duration ("P1M", "P3M", "P1W", "P1D", "PT1H", "P1Y"); null when the series is only numbered 1, 2, 3. */
  readonly every: string | null;
  /** ISO 8601 text of the first period ("2019-03", "2019-Q1", "2019-W07", "2019-03-05"); "1" when only numbered. */
  readonly start: string;
  readonly n: number;
  readonly values: Float64Array;
  /** Length n, ISO 8601 texts in the same form as `start`. */
  readonly times: readonly string[];
  /** The steps that led here, first one first; each remembers the series that it was given. */
  readonly steps: readonly AppliedStep[];
  /** What was observed after the end, where a window cut it off: for showing beside a forecast, never for making one. Only on a
   *  series without steps; a transformed one has it on the series that its first step was given. */
  readonly later?: Series;
}

/** Makes a series. Spacing null (the default) numbers the values from `start` "1".
 *  @throws RangeError where `start` is not a time or does not fit the spacing
 *  @example makeSeries({ name: "x", every: "P1M", start: "2019-11", values: [1, 2, 3] }).times // ["2019-11", "2019-12", "2020-01"] */
export function makeSeries(given: {
  readonly name: string;
  readonly unit?: string;
  readonly every?: string | null;
  readonly start?: string;
  readonly values: ArrayLike<number>;
  readonly steps?: readonly AppliedStep[];
  /** Texts of the times where the caller has them already. */
  readonly times?: readonly string[];
}): Series {
  const { name, unit = "", every = null, start = given.times?.[0] ?? "1", steps = [] } = given;
  const values = given.values instanceof Float64Array ? given.values : Float64Array.from(given.values);
  const times = given.times ?? timesFrom(start, every, values.length);
  return { name, unit, every, start, n: values.length, values, times, steps };
}

/** Whether a value is a series. */
export function isSeries(x: unknown): x is Series {
  if (typeof x !== "object" || x === null) return false;
  const s = x as Partial<Series>;
  return s.values instanceof Float64Array && Array.isArray(s.times) && Array.isArray(s.steps) && typeof s.name === "string" && typeof s.start === "string" && s.n === s.values.length;
}

/** The numbers of a series or of a bare array. An array is copied into doubles; `null` in it is missing. */
export function valuesOf(x: Series | ArrayLike<number | null>): Float64Array {
  if (isSeries(x)) return x.values;
  if (x instanceof Float64Array) return x;
  if (typeof x !== "object" || x === null || typeof (x as ArrayLike<number>).length !== "number") throw new RangeError("expected a series or a list of numbers");
  const list = x as ArrayLike<number | null>;
  const values = new Float64Array(list.length);
  for (let i = 0; i < list.length; i++) {
    const v = list[i];
    if (v !== null && typeof v !== "number") throw new RangeError(`expected a list of numbers, and item ${i + 1} is ${typeof v === "string" ? `the text "${String(v)}"` : `of type ${typeof v}`}`);
    values[i] = v ?? NaN;
  }
  return values;
}

/** UTC milliseconds of each period's first instant; the plain numbers where the series is only numbered. */
export function timesMs(series: Series): Float64Array {
  return milliseconds(series.start, series.every, series.n);
}

/** The same series with other values (and name, unit). Steps are dropped: they no longer tell how the values came about. */
export function withValues(series: Series, values: Float64Array, changes: { readonly name?: string; readonly unit?: string } = {}): Series {
  const { every, start, times } = series;
  return { name: changes.name ?? series.name, unit: changes.unit ?? series.unit, every, start, n: values.length, values, times, steps: [] };
}
