// Two series side by side over the periods that both have.

import { offsetBetween } from "../series/align.ts";
import type { Series } from "../series/series.ts";
import { isSeries, valuesOf } from "../series/series.ts";

export interface CommonStretch {
  readonly x: Float64Array; readonly y: Float64Array;
  /** First and last shared period; null for bare numbers. */
  readonly from: string | null; readonly to: string | null;
  /** What was left off, in words; null where both have the same periods. */
  readonly note: string | null;
}

/** Series are aligned by their times (numbered ones by their numbers); bare numbers must be equally many.
 *  @throws RangeError where they share no period, or the spacings or counts differ */
export function commonStretch(who: string, x: Series | ArrayLike<number>, y: Series | ArrayLike<number>): CommonStretch {
  if (!isSeries(x) || !isSeries(y)) {
    const a = valuesOf(x), b = valuesOf(y);
    if (a.length !== b.length) throw new RangeError(`${who}: the first has ${a.length} values and the second ${b.length}; bare numbers have no dates to align them by, so cut both to the same periods, or give two series`);
    return { x: a, y: b, from: null, to: null, note: null };
  }
  const offset = offsetBetween(x, y), from = Math.max(0, offset), to = Math.min(x.n, offset + y.n);
  if (to <= from) throw new RangeError(`${who}: ${nameOf(x, "the first series")} (${span(x)}) and ${nameOf(y, "the second")} (${span(y)}) share no period`);
  const same = to - from === x.n && to - from === y.n;
  return {
    x: x.values.slice(from, to), y: y.values.slice(from - offset, to - offset), from: x.times[from], to: x.times[to - 1],
    note: same ? null : `${nameOf(x, "The first series")} (${span(x)}) and ${nameOf(y, "the second")} (${span(y)}) are compared over the periods that both have, ${x.times[from]} to ${x.times[to - 1]}`,
  };
}

function nameOf(series: Series, otherwise: string): string {
  return series.name || otherwise;
}

function span(series: Series): string {
  return `${series.times[0]} to ${series.times[series.n - 1]}`;
}
