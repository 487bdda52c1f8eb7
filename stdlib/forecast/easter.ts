// The date of Easter Sunday: the moving holiday whose effect on monthly and weekly figures is best known.

/** Easter Sunday of a year in the Gregorian calendar, as UTC milliseconds.
 *  @param year  a whole year from 1583 on
 *  Source: the "anonymous" computus, as given by Meeus (1991), Astronomical Algorithms, chapter 8.
 *  @example new Date(easterMs(2024)).toISOString().slice(0, 10) // "2024-03-31" */
export function easterMs(year: number): number {
  const a = year % 19, b = Math.floor(year / 100), c = year % 100;
  const d = Math.floor(b / 4), e = b % 4, f = Math.floor((b + 8) / 25), g = Math.floor((b - f + 1) / 3);
  const h = (19 * a + b - d - g + 15) % 30, i = Math.floor(c / 4), k = c % 4;
  const l = (32 + 2 * e + 2 * i - h - k) % 7, m = Math.floor((a + 11 * h + 22 * l) / 451);
  const month = Math.floor((h + l - 7 * m + 114) / 31), day = ((h + l - 7 * m + 114) % 31) + 1;
  return Date.UTC(year, month - 1, day);
}
