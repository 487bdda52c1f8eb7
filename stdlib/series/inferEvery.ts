// The spacing of a list of times, found from the times themselves.

import { civilFromDays, dayMs } from "./civil.ts";
import { formatEvery } from "./every.ts";
import { startMs, type Period } from "./period.ts";

/** The spacing that explains ordered, distinct periods with the fewest gaps: their usual step, by count, when every period
 *  falls on its grid. Null where there is none, or fewer than two periods.
 *  @example inferEvery(["2019-01", "2019-02", "2019-04"].map((t) => parsePeriod(t)!)) // "P1M" */
export function inferEvery(periods: readonly Period[]): string | null {
  if (periods.length < 2) return null;
  const unit = periods[0].unit;
  if (periods.some((p) => p.unit !== unit)) return null;
  if (unit === "day" || unit === "time") return calendarMonths(periods) ?? spacedMs(periods);
  const step = commonStep(periods.map((p) => p.index));
  if (step === null) return null;
  const months = { number: 0, year: 12, quarter: 3, month: 1, week: 0 }[unit];
  return formatEvery(unit === "week" ? { months: 0, ms: 7 * dayMs * step } : { months: months * step, ms: 0 });
}

/** Dates a whole number of months apart: on one day of the month, or each on the last days of its month. */
function calendarMonths(periods: readonly Period[]): string | null {
  const dates = periods.map((p) => ({ ...civilFromDays(Math.floor(startMs(p) / dayMs)), clock: startMs(p) - Math.floor(startMs(p) / dayMs) * dayMs }));
  const oneDay = dates.every((d) => d.day === dates[0].day && d.clock === dates[0].clock);
  const ends = dates.every((d) => d.day >= 28 && d.clock === 0) && dates.some((d) => d.day !== dates[0].day) && !oneDay;
  if (!oneDay && !ends) return null;
  const step = commonStep(dates.map((d) => d.year * 12 + d.month - 1));
  return step === null ? null : formatEvery({ months: step, ms: 0 });
}

function spacedMs(periods: readonly Period[]): string | null {
  const step = commonStep(periods.map(startMs));
  return step === null || step % 1000 !== 0 ? null : formatEvery({ months: 0, ms: step });
}

/** The commonest difference of an increasing list, when it divides all of them; otherwise their greatest common divisor,
 *  when that occurs at least once and not fewer than half the periods are there. */
function commonStep(index: readonly number[]): number | null {
  const counts = new Map<number, number>();
  for (let i = 1; i < index.length; i++) counts.set(index[i] - index[i - 1], (counts.get(index[i] - index[i - 1]) ?? 0) + 1);
  if ([...counts.keys()].some((d) => d <= 0)) return null;
  const commonest = [...counts].sort((a, b) => b[1] - a[1] || a[0] - b[0])[0][0];
  const divides = (step: number): boolean => [...counts.keys()].every((d) => d % step === 0);
  if (divides(commonest)) return commonest;
  const divisor = [...counts.keys()].reduce(greatestCommonDivisor);
  const span = (index[index.length - 1] - index[0]) / divisor + 1;
  return counts.has(divisor) && index.length * 2 >= span ? divisor : null;
}

function greatestCommonDivisor(a: number, b: number): number {
  return b === 0 ? a : greatestCommonDivisor(b, a % b);
}
