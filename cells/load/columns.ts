// Which columns of a file hold the times and the values.

import { OptionError } from "../kind.ts";
import { cellOf, isNumeric, looksLikeTime, type Sheet } from "./sheet.ts";
import { numberOf } from "./numbers.ts";

const timeHeader = /^(time|date|datetime|timestamp|year|yr|month|quarter|week|day|hour|period|t|obs|observation|index|no|nr|id|#)$/i;
const countHeader = /^(time|period|t|obs|observation|index|no|nr|id|#)$/i;

/** Position of the column of a name.
 *  @throws OptionError that names the columns there are */
export function columnNamed(sheet: Sheet, name: string, option: string): number {
  const found = sheet.columns.flatMap((column, i) => (column === name ? [i] : []));
  if (found.length === 1) return found[0];
  if (found.length > 1) throw new OptionError(option, `${sheet.file} has ${found.length} columns called "${name}"; give them different names in its header`);
  const close = sheet.columns.find((column) => column.toLowerCase() === name.trim().toLowerCase());
  const list = sheet.columns.slice(0, 12).map((column) => `"${column}"`).join(", ");
  throw new OptionError(option, `${sheet.file} has no column "${name}"${close === undefined ? `; its columns are ${list}${sheet.columns.length > 12 ? ", …" : ""}` : `: did you mean "${close}"?`}`);
}

/** Columns that hold the times: as asked; otherwise the first that holds times (a year and a month beside each other, both);
 *  none where the file has no times. */
export function timeColumns(sheet: Sheet, asked: string | readonly string[] | undefined): readonly number[] {
  if (asked !== undefined) return (typeof asked === "string" ? [asked] : asked).map((name) => columnNamed(sheet, name, "time"));
  const year = sheet.columns.findIndex((name) => /^(year|yr)$/i.test(name));
  const part = sheet.columns.findIndex((name) => /^(month|quarter|qtr|week)$/i.test(name));
  if (year >= 0 && part >= 0 && repeats(sheet, year) && wholeYears(sheet, year)) {
    const day = sheet.columns.findIndex((name) => /^day$/i.test(name));
    return day >= 0 && /^month$/i.test(sheet.columns[part]) ? [year, part, day] : [year, part];
  }
  const found = sheet.columns.findIndex((_, column) => holdsTimes(sheet, column) && !isCount(sheet, column));
  const counted = found >= 0 ? found : sheet.columns.findIndex((_, column) => holdsTimes(sheet, column)); // dates go before a mere numbering
  return counted < 0 ? [] : [counted];
}

/** Numeric columns other than some, a numbering of the rows the last. */
export function numericColumns(sheet: Sheet, except: readonly number[]): readonly number[] {
  const all = sheet.columns.flatMap((_, column) => (!except.includes(column) && isNumeric(sheet, column) ? [column] : []));
  return [...all.filter((column) => !isCount(sheet, column)), ...all.filter((column) => isCount(sheet, column))];
}

/** Whether a column only numbers the rows: 0 or 1 and on by ones. */
function isCount(sheet: Sheet, column: number): boolean {
  const first = Number(cellOf(sheet.rows[0], column));
  return (first === 0 || first === 1) && sheet.rows.length > 1 && sheet.rows.slice(0, 1000).every((row, i) => cellOf(row, column) === String(first + i));
}

function holdsTimes(sheet: Sheet, column: number): boolean {
  // The first thousand rows show what a column holds.
  const cells = sheet.rows.slice(0, 1000).map((row) => cellOf(row, column)).filter((cell) => !sheet.missing.has(cell));
  if (cells.length === 0) return false;
  const whole = cells.filter((cell) => /^[+-]?\d+$/.test(cell)).length;
  if (whole >= 0.9 * cells.length) return countsTime(cells, sheet.columns[column], sheet.named);
  const times = cells.filter((cell) => numberOf(cell, sheet.decimal) === null && looksLikeTime(cell)).length;
  return times >= 0.6 * cells.length;
}

/** Whole numbers are times when they are years, months or days written together, or a count, and go up in order. */
function countsTime(cells: readonly string[], header: string, named: boolean): boolean {
  const values = cells.map(Number);
  const hinted = named && timeHeader.test(header);
  const width = cells.every((cell) => /^[+-]?\d{4}$/.test(cell)) ? 4 : cells.every((cell) => /^\d{6}$/.test(cell)) ? 6 : cells.every((cell) => /^\d{8}$/.test(cell)) ? 8 : 0;
  const steps = values.slice(1).map((v, i) => v - values[i]);
  const even = steps.length > 0 && steps.every((d) => d === steps[0]) && Math.abs(steps[0]) > 0;
  if (width === 4) return hinted || (even && Math.abs(steps[0]) <= 10);
  if (width > 0) return looksLikeTime(cells[0]) && (hinted || steps.every((d) => d > 0)) && cells.every(looksLikeTime);
  return (named && countHeader.test(header)) || (even && steps[0] === 1 && (values[0] === 0 || values[0] === 1) && !/value/i.test(header) && cells.length > 2);
}

function repeats(sheet: Sheet, column: number): boolean {
  return new Set(sheet.rows.map((row) => cellOf(row, column))).size < sheet.rows.length;
}

function wholeYears(sheet: Sheet, column: number): boolean {
  return sheet.rows.every((row) => /^[+-]?\d{4}$/.test(cellOf(row, column)));
}
