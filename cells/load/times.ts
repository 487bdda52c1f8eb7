// Times as people write them in data files, to periods.

import { parsePeriod, period, type Period } from "../../stdlib/index.ts";

export type DayOrder = "day-month" | "month-day";

const monthNames = ["jan", "feb", "mar", "apr", "may", "jun", "jul", "aug", "sep", "oct", "nov", "dec"];
const longNames = ["january", "february", "march", "april", "may", "june", "july", "august", "september", "october", "november", "december"];

/** 03.2019, where it cannot well be meant as a number. */
export const monthPointYear = /^(0?[1-9]|1[0-2])\.((?:1[89]|20|21)\d\d)$/;

/** 1 to 12 of an English month name, short or long; null of anything else. */
export function monthOfName(text: string): number | null {
  const name = text.toLowerCase().replace(/\.$/, "");
  const short = monthNames.indexOf(name === "sept" ? "sep" : name);
  const index = short >= 0 ? short : longNames.indexOf(name);
  return index >= 0 ? index + 1 : null;
}

/** The period that a cell names: an ISO 8601 text, one of its relatives (2019/3/5, 2019M03, 201903, 2019 Q1, Q1 2019,
 *  Mar 2019, 5 March 2019), or day, month and year in the order given. Null of anything else.
 *  @throws RangeError where the form is right and there is no such date */
export function timeOf(cell: string, order: DayOrder | null): Period | null {
  const iso = parsePeriod(cell);
  if (iso !== null) return plausible(iso, cell);
  let m: RegExpExecArray | null;
  if ((m = /^(\d{4})[-/](\d{1,2})$/.exec(cell)) || (m = /^(\d{4})[Mm]\s?(\d{1,2})$/.exec(cell)) || (m = /^(\d{4})[:\s]\s?[Mm]?(\d{1,2})$/.exec(cell))) return parsePeriod(`${m[1]}-${m[2].padStart(2, "0")}`);
  if ((m = /^(\d{1,2})[-/](\d{4})$/.exec(cell)) || (m = monthPointYear.exec(cell))) return parsePeriod(`${m[2]}-${m[1].padStart(2, "0")}`);
  if ((m = /^(\d{4})[\s:]?-?[Qq]\s?([1-9])$/.exec(cell))) return parsePeriod(`${m[1]}-Q${m[2]}`);
  if ((m = /^[Qq]\s?([1-9])[-\s/]*(\d{4})$/.exec(cell))) return parsePeriod(`${m[2]}-Q${m[1]}`);
  if ((m = /^(\d{4})[\s:]?-?[Ww]\s?(\d{1,2})$/.exec(cell))) return parsePeriod(`${m[1]}-W${m[2].padStart(2, "0")}`);
  if (/^\d{1,2}[-/.]\d{1,2}[-/.]\d{2}(?=$|\s)/.test(cell) || /^[A-Za-z]{3,9}[-\s/']+\d{2}$/.test(cell) && monthOfName(/^[A-Za-z]+/.exec(cell)?.[0] ?? "") !== null) {
    throw new RangeError(`${cell} has a year of two digits; write all four`);
  }
  return dateOf(cell, order) ?? namedMonth(cell);
}

/** Six and eight digits are months and days written together, where they can be; ISO years have four. */
function plausible(found: Period, cell: string): Period | null {
  if (found.unit !== "year" || /^[+-]/.test(cell) || cell.length === 4) return found;
  return cell.length === 6 && Number(cell.slice(4)) >= 1 && Number(cell.slice(4)) <= 12 ? parsePeriod(`${cell.slice(0, 4)}-${cell.slice(4)}`) : null;
}

function dateOf(cell: string, order: DayOrder | null): Period | null {
  let m: RegExpExecArray | null;
  if ((m = /^(\d{4})(\d\d)(\d\d)$/.exec(cell))) return parsePeriod(`${m[1]}-${m[2]}-${m[3]}`);
  const [, date, clock] = /^(\S+?)(?:[T\s,]+(\d.*))?$/.exec(cell) ?? [];
  if (date === undefined) return null;
  if ((m = /^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})$/.exec(date))) return withClock(m[1], m[2], m[3], clock);
  const parts = slashed(date);
  if (parts === null || order === null) return null;
  return order === "day-month" ? withClock(parts[2], parts[1], parts[0], clock) : withClock(parts[2], parts[0], parts[1], clock);
}

/** The three numbers of a date whose year comes last; null of anything else. Which of the first two is the day, `order` says. */
function slashed(cell: string): readonly [string, string, string] | null {
  const m = /^(\d{1,2})[-/.](\d{1,2})[-/.](\d{4})(?=$|[T\s,])/.exec(cell);
  return m === null ? null : [m[1], m[2], m[3]];
}

function withClock(year: string, month: string, day: string, clock: string | undefined): Period | null {
  const date = `${year}-${month.padStart(2, "0")}-${day.padStart(2, "0")}`;
  if (clock === undefined) return parsePeriod(date);
  const half = /^(\d{1,2})(:\d\d)?(:\d\d)?\s*([AaPp])\.?[Mm]\.?$/.exec(clock);
  const hour = half ? (Number(half[1]) % 12) + (/p/i.test(half[4]) ? 12 : 0) : null;
  const text = half ? `${String(hour).padStart(2, "0")}${half[2] ?? ":00"}${half[3] ?? ""}` : clock.replace(/^(\d):/, "0$1:");
  return parsePeriod(`${date}T${text}`);
}

function namedMonth(cell: string): Period | null {
  const words = cell.split(/[\s,/-]+/).filter((w) => w !== "");
  const name = words.findIndex((w) => monthOfName(w) !== null);
  if (name < 0 || words.length > 3) return null;
  const month = String(monthOfName(words[name])).padStart(2, "0");
  const rest = words.filter((_, i) => i !== name);
  const year = rest.find((w) => /^\d{4}$/.test(w));
  if (year === undefined) return null;
  if (rest.length === 1) return parsePeriod(`${year}-${month}`);
  const day = rest.find((w) => w !== year)?.replace(/(st|nd|rd|th)$/, "") ?? "";
  return /^\d{1,2}$/.test(day) ? parsePeriod(`${year}-${month}-${day.padStart(2, "0")}`) : null;
}

/** The order of day and month that the dates of a column show; null where they show none, "both" where they contradict each other. */
export function orderOf(cells: readonly string[]): DayOrder | "both" | "unsure" | null {
  let any = false, dayFirst = false, monthFirst = false, dotted = true;
  for (const cell of cells) {
    const parts = slashed(cell);
    if (parts === null) continue;
    any = true;
    if (!/^\d+\.\d+\./.test(cell)) dotted = false;
    if (Number(parts[0]) > 12) dayFirst = true;
    else if (Number(parts[1]) > 12) monthFirst = true;
  }
  if (!any) return null;
  if (dayFirst && monthFirst) return "both";
  if (dayFirst) return "day-month";
  if (monthFirst) return "month-day";
  return dotted ? "day-month" : "unsure"; // 5.3.2019, with points, is written day first everywhere
}

/** A plain count as a period of an undated series. */
export function numbered(cell: string): Period | null {
  return /^[+-]?\d{1,9}$/.test(cell) ? period("number", Number(cell)) : null;
}
