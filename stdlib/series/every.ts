// The spacing of a series: ISO 8601 durations, and what follows from one (a season's length, periods a year).

import { dayMs } from "./civil.ts";

/** A spacing counted in months, or in milliseconds for weeks and below. Exactly one is not 0. */
export interface Spacing { readonly months: number; readonly ms: number }

const words: Readonly<Record<string, string>> = {
  year: "P1Y", quarter: "P3M", month: "P1M", week: "P1W", day: "P1D", hour: "PT1H", minute: "PT1M", second: "PT1S",
};

/** Names that may stand for a spacing. */
const everyWords: readonly string[] = Object.keys(words);

/** Reads a spacing: a word ("month") or an ISO 8601 duration of one part ("P1M", "P2W", "PT15M").
 *  @throws RangeError in words */
export function parseEvery(text: string): Spacing {
  const source = words[text] ?? text;
  const m = /^P(?:(\d+)([YMWD])|T(\d+)([HMS]))$/.exec(source);
  const count = Number(m?.[1] ?? m?.[3]);
  if (!m || !(count >= 1)) {
    throw new RangeError(`"${text}" is not a spacing: use ${everyWords.map((w) => `"${w}"`).join(", ")}, or an ISO 8601 duration such as "P1M" or "PT15M"`);
  }
  const unit = m[2] ?? `T${m[4]}`;
  switch (unit) {
    case "Y": return { months: 12 * count, ms: 0 };
    case "M": return { months: count, ms: 0 };
    case "W": return { months: 0, ms: 7 * dayMs * count };
    case "D": return { months: 0, ms: dayMs * count };
    case "TH": return { months: 0, ms: 3_600_000 * count };
    case "TM": return { months: 0, ms: 60_000 * count };
    default: return { months: 0, ms: 1000 * count };
  }
}

/** The usual ISO 8601 text of a spacing: "P1Y" rather than "P12M", "P1W" rather than "P7D". */
export function formatEvery({ months, ms }: Spacing): string {
  if (months > 0) return months % 12 === 0 ? `P${months / 12}Y` : `P${months}M`;
  if (ms % (7 * dayMs) === 0) return `P${ms / (7 * dayMs)}W`;
  if (ms % dayMs === 0) return `P${ms / dayMs}D`;
  if (ms % 3_600_000 === 0) return `PT${ms / 3_600_000}H`;
  if (ms % 60_000 === 0) return `PT${ms / 60_000}M`;
  return `PT${ms / 1000}S`;
}

/** A spacing in a few words: "month", "quarter", "2 weeks". */
export function everyInWords(every: string | null): string {
  if (every === null) return "observation";
  const { months, ms } = parseEvery(every);
  const [count, word] = months > 0
    ? months % 12 === 0 ? [months / 12, "year"] : months % 3 === 0 ? [months / 3, "quarter"] : [months, "month"]
    : ms % (7 * dayMs) === 0 ? [ms / (7 * dayMs), "week"] : ms % dayMs === 0 ? [ms / dayMs, "day"]
    : ms % 3_600_000 === 0 ? [ms / 3_600_000, "hour"] : ms % 60_000 === 0 ? [ms / 60_000, "minute"] : [ms / 1000, "second"];
  return count === 1 ? String(word) : `${count} ${word}s`;
}

/** Periods of a usual season: 12 months, 4 quarters, 52 weeks, 7 days, a day of hours or minutes; null where there is no usual one. */
export function defaultSeasonLength(every: string | null): number | null {
  if (every === null) return null;
  const { months, ms } = parseEvery(every);
  const length = months > 0 ? 12 / months : ms === 7 * dayMs ? 52 : ms === dayMs ? 7 : ms < dayMs ? dayMs / ms : 0;
  return Number.isInteger(length) && length >= 2 ? length : null;
}

/** Periods a year on average (365.2425 days); NaN where the series is only numbered. */
export function periodsAYear(every: string | null): number {
  if (every === null) return NaN;
  const { months, ms } = parseEvery(every);
  return months > 0 ? 12 / months : (365.2425 * dayMs) / ms;
}
