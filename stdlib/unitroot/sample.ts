// What a unit-root or stationarity test needs of its data, and why some data cannot answer.

import type { Series } from "../series/series.ts";
import { valuesOf } from "../series/series.ts";

/** The values to test, or the reason in words why they cannot be tested. */
export type Sample = { readonly values: Float64Array; readonly note: string | null; readonly why: null } | { readonly values: Float64Array; readonly note: null; readonly why: string };

/** Missing values at either end are left off, and said; a gap inside, too few values or values that do not vary cannot be answered. */
export function sampleOf(x: Series | ArrayLike<number>, least: number): Sample {
  const all = valuesOf(x);
  let from = 0, to = all.length;
  while (from < to && Number.isNaN(all[from])) from++;
  while (to > from && Number.isNaN(all[to - 1])) to--;
  const values = all.slice(from, to);
  const gaps = values.reduce((count, v) => count + (Number.isNaN(v) ? 1 : 0), 0);
  const fail = (why: string): Sample => ({ values, note: null, why });
  if (values.length === 0) return fail("no values are observed");
  if (gaps > 0) return fail(`${gaps} of ${values.length} values are missing inside the series, and the test needs a run without gaps: fill them first, or take a window without them`);
  if (values.every((v) => v === values[0])) return fail(`all ${values.length} values are the same`);
  if (values.length < least) return fail(`${values.length} values are too few for this regression, which needs ${least}`);
  const left = all.length - values.length;
  return { values, note: left === 0 ? null : `${left} missing ${left === 1 ? "value" : "values"} at the ends left off`, why: null };
}
