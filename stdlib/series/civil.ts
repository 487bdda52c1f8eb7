// Days and civil dates of the proleptic Gregorian calendar, with astronomical years (there is a year 0, and -1 before it).
// Own integer arithmetic, because the platform's Date treats the years 0 to 99 as 1900 to 1999.

/** Milliseconds of a day. */
export const dayMs = 86_400_000;

/** Days from 1970-01-01 to a date. Counts 400-year eras from 1 March, so that the leap day is the last of its year. */
export function daysFromCivil(year: number, month: number, day: number): number {
  const y = month <= 2 ? year - 1 : year;
  const era = Math.floor(y / 400);
  const yearOfEra = y - era * 400;
  const dayOfYear = Math.floor((153 * (month + (month > 2 ? -3 : 9)) + 2) / 5) + day - 1;
  const dayOfEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYear;
  return era * 146_097 + dayOfEra - 719_468;
}

/** The date a number of days after 1970-01-01. Inverse of `daysFromCivil`. */
export function civilFromDays(days: number): { readonly year: number; readonly month: number; readonly day: number } {
  const z = days + 719_468;
  const era = Math.floor(z / 146_097);
  const dayOfEra = z - era * 146_097;
  const yearOfEra = Math.floor((dayOfEra - Math.floor(dayOfEra / 1460) + Math.floor(dayOfEra / 36_524) - Math.floor(dayOfEra / 146_096)) / 365);
  const dayOfYear = dayOfEra - (365 * yearOfEra + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100));
  const shifted = Math.floor((5 * dayOfYear + 2) / 153);
  const month = shifted < 10 ? shifted + 3 : shifted - 9;
  const day = dayOfYear - Math.floor((153 * shifted + 2) / 5) + 1;
  return { year: yearOfEra + era * 400 + (month <= 2 ? 1 : 0), month, day };
}

/** Days of a month, 28 to 31. */
export function daysInMonth(year: number, month: number): number {
  return month === 12 ? 31 : daysFromCivil(year, month + 1, 1) - daysFromCivil(year, month, 1);
}

/** Week number of a day: whole weeks since Monday 1970-01-05. */
function weekOfDays(days: number): number {
  return Math.floor((days - 4) / 7);
}

/** First week (whole weeks since 1970-01-05) of an ISO week year: the one with its first Thursday, so with 4 January. */
export function firstWeek(year: number): number {
  return weekOfDays(daysFromCivil(year, 1, 4));
}

/** ISO week year and week number, 1 to 53. */
export function isoWeek(week: number): { readonly year: number; readonly week: number } {
  const year = civilFromDays(week * 7 + 4 + 3).year; // the year of the week's Thursday
  return { year, week: week - firstWeek(year) + 1 };
}
