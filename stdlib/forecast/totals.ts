// Totals over spans of time, part observed and part forecast, with the covariance of the forecast errors.

import { periodIndex, periodSpan } from "../series/calendar.ts";
import type { Series } from "../series/series.ts";
import { normalQuantile } from "../distributions/normal.ts";
import type { Note } from "../arma/model.ts";
import type { ForecastOptions, Total } from "./model.ts";
import { momentsOf, quantileOf, type Outlook } from "./outlook.ts";
import { sumsOver, type Paths } from "./paths.ts";
import { firstIndex, lastIndex } from "./reach.ts";

interface Span { readonly from: string; readonly to: string; readonly low: number; readonly high: number }

/** Totals in data units. Mean and standard error are exact where the covariance in data units is known (normal errors, logs);
 *  limits are exact where totals are normal, and otherwise from seeded draws.
 *  @param base   the observed series up to the origin
 *  @param paths  sample paths of the forecasts
 *  @throws RangeError where a span needs a longer horizon or a value that is not there */
export function totalsOf(asked: ForecastOptions["totals"], base: Series, outlook: Outlook, times: readonly string[], levels: readonly number[], paths: () => Paths): { readonly totals: readonly Total[]; readonly notes: readonly Note[] } {
  if (asked === undefined || asked === null) return { totals: [], notes: [] };
  const { spans, notes } = spansOf(asked, base, times);
  return { totals: spans.map((span) => totalOf(span, base, outlook, levels, paths)), notes };
}

function spansOf(asked: NonNullable<ForecastOptions["totals"]>, base: Series, times: readonly string[]): { readonly spans: readonly Span[]; readonly notes: readonly Note[] } {
  const list = typeof asked === "string" ? [asked] : Array.isArray(asked) ? asked as readonly (string | { readonly from: string; readonly to: string })[] : [asked as unknown as { readonly from: string; readonly to: string }];
  const notes: Note[] = [], spans: Span[] = [];
  for (const one of list) {
    if (one === "year") {
      const years = wholeYears(base, times);
      spans.push(...years.spans);
      if (years.left.length > 0) notes.push({ code: "part-year", tone: "note", text: `No total for ${years.left.join(", nor for ")}. Give a span, as in {from: …, to: …}, to total a part of a year.` });
      continue;
    }
    const { from, to } = endsOf(one);
    const low = periodSpan(from, base.every).from, high = periodSpan(to, base.every).to - 1;
    if (high < low) throw new RangeError(`totals: nothing lies between ${from} and ${to}`);
    spans.push({ from, to, low, high });
  }
  return { spans, notes };
}

function endsOf(span: unknown): { readonly from: string; readonly to: string } {
  if (typeof span === "string") return { from: span, to: span };
  if (typeof span === "number") throw new RangeError(`totals: ${span} is a number; quote the year, as in "${span}"`);
  const { from, to } = (typeof span === "object" && span !== null ? span : {}) as { readonly from?: unknown; readonly to?: unknown };
  if (typeof from === "string" && typeof to === "string") return { from, to };
  throw new RangeError("totals: a span is a year in quotes, such as \"2025\", or has both ends in quotes, as in {from: \"2025-01\", to: \"2025-06\"}");
}

/** Calendar years that the forecasts touch and that observed values and forecasts cover whole; and those they do not. */
function wholeYears(base: Series, times: readonly string[]): { readonly spans: readonly Span[]; readonly left: readonly string[] } {
  if (base.every === null) throw new RangeError("totals: the series is only numbered, so it has no years; give spans as in {from: \"1\", to: \"12\"}");
  const end = lastIndex(base) + times.length, spans: Span[] = [], left: string[] = [], name = base.name || "the series";
  // A week belongs to the year in its own text; any other period to the year that its text begins with.
  for (const year of new Set(times.map((t) => /^[+-]?\d+/.exec(t)?.[0] ?? t))) {
    const { from, to } = periodSpan(year, base.every), gap = gapIn(base, from);
    if (to - 1 > end) left.push(`${year} (the horizon ends with ${times[times.length - 1]})`);
    else if (from < firstIndex(base)) left.push(`${year} (${name} begins with ${base.start})`);
    else if (gap !== null) left.push(`${year} (${name} has no value at ${gap})`);
    else spans.push({ from: year, to: year, low: from, high: to - 1 });
  }
  return { spans, left };
}

/** The first missing value of the base from a period number on; null when none is. */
function gapIn(base: Series, from: number): string | null {
  for (let t = Math.max(0, from - firstIndex(base)); t < base.n; t++) if (Number.isNaN(base.values[t])) return base.times[t];
  return null;
}

function totalOf({ from, to, low, high }: Span, base: Series, outlook: Outlook, levels: readonly number[], paths: () => Paths): Total {
  const first = firstIndex(base), origin = lastIndex(base), { horizon } = outlook, label = from === to ? from : `${from} to ${to}`;
  if (high > origin + horizon) throw new RangeError(`totals: the total of ${label} needs a horizon of ${high - origin} periods; it is ${horizon}`);
  if (low < first) throw new RangeError(`totals: the total of ${label} needs values before ${base.start}, where ${base.name || "the series"} starts`);
  const past = sumOf(base, low, Math.min(high, origin), label);
  const begin = Math.max(0, low - origin - 1), end = high - origin, observed = Math.max(0, Math.min(high, origin) - low + 1);
  if (end <= 0) return { from, to, mean: past, median: past, se: 0, bands: levels.map((level) => ({ level, low: past, high: past })), observed };
  let mean = past;
  for (let h = begin; h < end; h++) mean += outlook.mean[h];
  const c = outlook.covariance();
  let variance = 0;
  if (c) for (let i = begin; i < end; i++) for (let j = begin; j < end; j++) variance += c[i * horizon + j];
  const before = yearBefore({ from, to, low, high }, base);
  if (c && outlook.normal) {
    const se = Math.sqrt(variance), at = (p: number): number => mean + normalQuantile(p) * se;
    return finish({ from, to, mean, median: mean, se, observed }, levels, at, before);
  }
  const sorted = sumsOver(paths(), begin, end).map((x) => past + x).sort(), { mean: average, sd: spread } = momentsOf(sorted);
  const se = c ? Math.sqrt(variance) : spread;
  // Where mean and standard error are known exactly the draws are moved and stretched to have them: only the shape is left to chance.
  const at = (p: number): number => (c && spread > 0 ? mean + (quantileOf(sorted, p) - average) * (se / spread) : quantileOf(sorted, p));
  return finish({ from, to, mean, median: at(0.5), se, observed }, levels, at, before);
}

function finish(total: Omit<Total, "bands" | "growth">, levels: readonly number[], at: (p: number) => number, before: number | null): Total {
  const bands = levels.map((level) => ({ level, low: at((1 - level) / 2), high: at((1 + level) / 2) }));
  if (before === null) return { ...total, bands };
  const share = (x: number): number => x / before - 1;
  return { ...total, bands, growth: { time: total.to, median: share(total.median), bands: bands.map((b) => ({ level: b.level, low: share(b.low), high: share(b.high) })) } };
}

/** The same span one year earlier, summed; null where it was not observed whole, is not above 0, or years have no fixed length. */
function yearBefore({ low, high }: Span, base: Series): number | null {
  const lag = wholeYearOf(base.every);
  if (lag === null || low - lag < firstIndex(base) || high - lag > lastIndex(base)) return null;
  let sum = 0;
  for (let k = low - lag; k <= high - lag; k++) sum += base.values[k - firstIndex(base)];
  return sum > 0 ? sum : null;
}

/** Periods from a period to the same one a year before: 12 months, 4 quarters, 1 year; 52 weeks; null where that is not a fixed number. */
export function wholeYearOf(every: string | null): number | null {
  if (every === null) return null;
  if (every === "P1W") return 52;
  const a = periodIndex("2000", every), b = periodIndex("2001", every), c = periodIndex("2002", every);
  return b - a === c - b && periodIndex("2005", every) - periodIndex("2004", every) === b - a ? b - a : null;
}

function sumOf(base: Series, low: number, high: number, label: string): number {
  let sum = 0;
  for (let k = low; k <= high; k++) {
    const t = k - firstIndex(base);
    if (Number.isNaN(base.values[t])) throw new RangeError(`totals: the total of ${label} needs ${base.name || "the series"} at ${base.times[t]}, which is missing. Fill the gap, or total a span without it`);
    sum += base.values[t];
  }
  return sum;
}
