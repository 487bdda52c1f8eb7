// Aggregation to a longer period: sums, means or last values of whole periods.

import { gridIndex, periodOf, shifted } from "./calendar.ts";
import { dayMs } from "./civil.ts";
import { everyInWords, formatEvery, parseEvery } from "./every.ts";
import { formatPeriod, period, startMs, type Period } from "./period.ts";
import type { Series } from "./series.ts";

export type AggregateHow = "sum" | "mean" | "last";

/** A series of longer periods. A period that the series does not cover whole is dropped; one with a missing value inside is missing.
 *  @throws RangeError where the series is only numbered, or `to` is not longer than its spacing */
export function aggregated(series: Series, to: string, how: AggregateHow): Series {
  if (series.every === null) throw new RangeError(`aggregate: ${series.name || "the series"} is only numbered; aggregating needs dates`);
  if (how !== "sum" && how !== "mean" && how !== "last") throw new RangeError(`aggregate: "${String(how)}" is no way of aggregating; use "sum", "mean" or "last"`);
  const every = formatEvery(parseEvery(to));
  const groups = groupsOf(series, every);
  if (groups.length === 0) throw new RangeError(`aggregate: ${series.name || "the series"} covers no whole ${everyInWords(every)}`);
  const values = Float64Array.from(groups, ({ from, end }) => summary(series.values, from, end, how));
  const times = groups.map((g) => g.time);
  return { name: series.name, unit: series.unit, every, start: times[0], n: values.length, values, times, steps: [] };
}

/** Whole longer periods inside a series: `from`..`end` are its positions, half open. `dropped` periods at the ends are not whole. */
function groupsOf(series: Series, every: string): readonly { readonly time: string; readonly from: number; readonly end: number }[] {
  const own = parseEvery(series.every ?? "P1D");
  const longer = parseEvery(every);
  const first = periodOf(series.start, series.every);
  if (!isLonger(longer, own, first)) throw new RangeError(`aggregate: ${series.name || "the series"} comes every ${everyInWords(series.every)}, and ${JSON.stringify(every)} does not hold whole numbers of that; choose a longer period`);
  const lead = first.unit === "week" ? 3 * dayMs : 0; // an ISO week belongs to the period of its Thursday
  const groups: { time: string; from: number; end: number }[] = [];
  const keyAt = (k: number): number => gridIndex(startMs(shifted(first, own, k)) + lead, longer);
  let from = 0;
  for (let t = 1; t <= series.n; t++) {
    if (t < series.n && keyAt(t) === keyAt(from)) continue;
    const key = keyAt(from);
    const startsWhole = from > 0 || keyAt(-1) !== key;
    const endsWhole = t < series.n || keyAt(t) !== key;
    if (startsWhole && endsWhole) groups.push({ time: formatPeriod(namedPeriod(startMs(shifted(first, own, from)) + lead, every)), from, end: t });
    from = t;
  }
  return groups;
}

function isLonger(longer: { months: number; ms: number }, own: { months: number; ms: number }, first: Period): boolean {
  if (longer.months > 0) return own.months > 0 ? longer.months > own.months && longer.months % own.months === 0 : own.ms <= 7 * dayMs;
  return own.months === 0 && longer.ms > own.ms && longer.ms % own.ms === 0 && first.unit !== "week";
}

/** The period of a spacing that contains an instant, in its usual form. */
function namedPeriod(ms: number, every: string): Period {
  const spacing = parseEvery(every);
  const key = gridIndex(ms, spacing);
  const { months, ms: spacingMs } = spacing;
  if (months === 3) return period("quarter", key);
  if (months % 12 === 0 && months > 0) return period("year", key * (months / 12));
  if (months > 0) return period("month", key * months);
  if (spacingMs === 7 * dayMs) return period("week", key);
  if (spacingMs % (7 * dayMs) === 0) return period("day", (key * spacingMs) / dayMs + 4);
  return spacingMs % dayMs === 0 ? period("day", (key * spacingMs) / dayMs) : period("time", key * spacingMs, "Z", 60_000);
}

function summary(values: Float64Array, from: number, end: number, how: AggregateHow): number {
  if (how === "last") return values[end - 1];
  let sum = 0;
  for (let t = from; t < end; t++) sum += values[t];
  return how === "sum" ? sum : sum / (end - from);
}
