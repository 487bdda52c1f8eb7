// Periods as ISO 8601 texts: years, quarters, months, weeks, days and instants.

import { civilFromDays, dayMs, daysFromCivil, daysInMonth, firstWeek, isoWeek } from "./civil.ts";

/** What a time text names. "number" is a plain count 1, 2, 3 of an undated series; it is never parsed, only made. */
export type PeriodUnit = "number" | "year" | "quarter" | "month" | "week" | "day" | "time";

/** `index` counts: the number itself; years; quarters or months from year 0; weeks from 1970-01-05; days or milliseconds (UTC) from 1970-01-01. */
export interface Period {
  readonly unit: PeriodUnit;
  readonly index: number;
  /** How an instant is written: "" without a zone (taken as UTC), "Z" with one. */
  readonly zone: "" | "Z";
  /** Smallest part of an instant that was written: 1 second or 1 minute, in milliseconds. 0 for the other units. */
  readonly resolutionMs: number;
}

const yearText = String.raw`([+-]?\d{4,6})`;
const patterns = {
  year: new RegExp(`^${yearText}$`),
  quarter: new RegExp(`^${yearText}-?[Qq]([1-9])$`),
  month: new RegExp(String.raw`^${yearText}-(\d\d)$`),
  week: new RegExp(String.raw`^${yearText}-?[Ww](\d\d)$`),
  weekday: new RegExp(String.raw`^${yearText}-?[Ww](\d\d)-([1-7])$`),
  day: new RegExp(String.raw`^${yearText}-(\d\d)-(\d\d)$`),
  time: new RegExp(String.raw`^${yearText}-(\d\d)-(\d\d)[T ](\d\d)(?::?(\d\d)(?::?(\d\d)(?:[.,](\d{1,9}))?)?)?\s?(Z|z|[+-]\d\d(?::?\d\d)?)?$`),
} as const;

/** Reads an ISO 8601 text.
 *  @returns null when the text has no such form at all
 *  @throws RangeError in words when it has the form and names no date ("2019-13 is not a date: there is no month 13")
 *  @example parsePeriod("2019-Q1") // { unit: "quarter", index: 8076, zone: "", resolutionMs: 0 } */
export function parsePeriod(text: string): Period | null {
  let m: RegExpExecArray | null;
  if ((m = patterns.year.exec(text))) return period("year", Number(m[1]));
  if ((m = patterns.quarter.exec(text))) return period("quarter", Number(m[1]) * 4 + bounded(text, "quarter", m[2], 4) - 1);
  if ((m = patterns.month.exec(text))) return period("month", Number(m[1]) * 12 + bounded(text, "month", m[2], 12) - 1);
  if ((m = patterns.week.exec(text))) return period("week", weekIndex(text, m[1], m[2]));
  if ((m = patterns.weekday.exec(text))) return period("day", weekIndex(text, m[1], m[2]) * 7 + 4 + Number(m[3]) - 1);
  if ((m = patterns.day.exec(text))) return period("day", dayIndex(text, m[1], m[2], m[3]));
  if ((m = patterns.time.exec(text))) return instant(text, m);
  return null;
}

/** Writes a period as its ISO 8601 text. Inverse of `parsePeriod` for the usual forms. */
export function formatPeriod(p: Period): string {
  switch (p.unit) {
    case "number": return String(p.index);
    case "year": return yearOf(p.index);
    case "quarter": return `${yearOf(Math.floor(p.index / 4))}-Q${p.index - Math.floor(p.index / 4) * 4 + 1}`;
    case "month": return `${yearOf(Math.floor(p.index / 12))}-${two(p.index - Math.floor(p.index / 12) * 12 + 1)}`;
    case "week": { const w = isoWeek(p.index); return `${yearOf(w.year)}-W${two(w.week)}`; }
    case "day": return dateText(p.index);
    case "time": return timeText(p);
  }
}

/** UTC milliseconds of a period's first instant; of a plain number, the number itself. */
export function startMs(p: Period): number {
  switch (p.unit) {
    case "number": return p.index;
    case "year": return daysFromCivil(p.index, 1, 1) * dayMs;
    case "quarter": return monthMs(p.index * 3);
    case "month": return monthMs(p.index);
    case "week": return (p.index * 7 + 4) * dayMs;
    case "day": return p.index * dayMs;
    case "time": return p.index;
  }
}

/** UTC milliseconds of the first instant after a period: a partial date covers all of it. */
export function endMs(p: Period): number {
  return p.unit === "time" ? p.index + p.resolutionMs : startMs({ ...p, index: p.index + 1 });
}

/** A period of one of the counted units. */
export function period(unit: PeriodUnit, index: number, zone: "" | "Z" = "", resolutionMs = 0): Period {
  return { unit, index, zone, resolutionMs };
}

function instant(text: string, m: RegExpExecArray): Period {
  const day = dayIndex(text, m[1], m[2], m[3]);
  const hour = bounded(text, "hour", m[4], 24, 0);
  const minute = m[5] === undefined ? 0 : bounded(text, "minute", m[5], 59, 0);
  const second = m[6] === undefined ? 0 : bounded(text, "second", m[6], 59, 0);
  const milli = m[7] === undefined ? 0 : Math.trunc(Number(`0.${m[7]}`) * 1000 + 1e-6);
  if (hour === 24 && minute + second + milli > 0) throw new RangeError(`${text} is not a time: 24:00 is the last instant of a day`);
  const offset = m[8] === undefined || /^z$/i.test(m[8]) ? 0 : offsetMinutes(m[8]);
  const resolution = m[7] !== undefined ? 1 : m[6] !== undefined ? 1000 : m[5] !== undefined ? 60_000 : 3_600_000;
  const ms = day * dayMs + ((hour * 60 + minute - offset) * 60 + second) * 1000 + milli;
  return period("time", ms, m[8] === undefined ? "" : "Z", resolution);
}

function offsetMinutes(text: string): number {
  const digits = text.slice(1).replace(":", "");
  const minutes = Number(digits.slice(0, 2)) * 60 + Number(digits.slice(2) || "0");
  return text.startsWith("-") ? -minutes : minutes;
}

function timeText(p: Period): string {
  const days = Math.floor(p.index / dayMs);
  const ms = p.index - days * dayMs;
  const clock = `${two(Math.floor(ms / 3_600_000))}:${two(Math.floor(ms / 60_000) % 60)}`;
  const seconds = ms % 60_000 === 0 && p.resolutionMs >= 60_000 ? "" : `:${two(Math.floor(ms / 1000) % 60)}`;
  const milli = ms % 1000 === 0 ? "" : `.${String(ms % 1000).padStart(3, "0")}`;
  return `${dateText(days)}T${clock}${seconds}${milli}${p.zone}`;
}

function weekIndex(text: string, year: string, week: string): number {
  const first = firstWeek(Number(year));
  return first + bounded(text, "week", week, firstWeek(Number(year) + 1) - first) - 1;
}

function dayIndex(text: string, year: string, month: string, day: string): number {
  const m = bounded(text, "month", month, 12);
  const length = daysInMonth(Number(year), m);
  const d = Number(day);
  if (d < 1 || d > length) throw new RangeError(`${text} is not a date: that month has ${length} days`);
  return daysFromCivil(Number(year), m, d);
}

function bounded(text: string, what: string, digits: string, max: number, min = 1): number {
  const value = Number(digits);
  if (value < min || value > max) throw new RangeError(`${text} is not a date: there is no ${what} ${digits}${what === "week" ? " in that year" : ""}`);
  return value;
}

function monthMs(index: number): number {
  const year = Math.floor(index / 12);
  return daysFromCivil(year, index - year * 12 + 1, 1) * dayMs;
}

function dateText(days: number): string {
  const { year, month, day } = civilFromDays(days);
  return `${yearOf(year)}-${two(month)}-${two(day)}`;
}

function yearOf(year: number): string {
  const digits = String(Math.abs(year)).padStart(4, "0");
  return year < 0 ? `-${digits}` : year > 9999 ? `+${digits}` : digits;
}

function two(value: number): string {
  return value < 10 ? `0${value}` : String(value);
}
