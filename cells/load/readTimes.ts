// The times of a file's rows, as periods of one form.

import { formatPeriod, type Period } from "../../stdlib/index.ts";
import { OptionError } from "../kind.ts";
import type { Sheet } from "./sheet.ts";
import { monthOfName, numbered, orderOf, timeOf, type DayOrder } from "./times.ts";

/** The period of each row, in the order of the file.
 *  @throws OptionError naming file and line */
export function readTimes(sheet: Sheet, columns: readonly number[], order: DayOrder | undefined): Period[] {
  const cells = sheet.rows.map((row) => joined(sheet, row.cells, columns, row.line));
  if (columns.length === 1 && isCount(cells)) return cells.map((cell) => numbered(cell) as Period);
  const found = order ?? decidedOrder(sheet, cells);
  const periods = cells.map((cell, i) => {
    const where = `${sheet.file}, line ${sheet.rows[i].line}`;
    if (cell === "") throw new OptionError("time", `${where}: there is no time in column "${sheet.columns[columns[0]]}"`);
    try {
      const p = timeOf(cell, found);
      if (p !== null) return p;
    } catch (error) {
      if (error instanceof RangeError) throw new OptionError("time", `${where}: ${error.message}${hint(cell, found, order)}`);
      throw error;
    }
    throw new OptionError("time", `${where}: "${cell}" is not a time; write "2019-03" for a month, "2019-Q1" for a quarter, "2019-03-05" for a day`);
  });
  const other = periods.findIndex((p) => p.unit !== periods[0].unit);
  if (other > 0) throw new OptionError("time", `${sheet.file}, line ${sheet.rows[other].line}: ${formatPeriod(periods[other])} is a ${periods[other].unit}, where the rows before give a ${periods[0].unit} such as ${formatPeriod(periods[0])}; write all times alike`);
  return periods;
}

function hint(cell: string, found: DayOrder | null, given: DayOrder | undefined): string {
  return given !== undefined && orderOf([cell]) !== null ? `; \`order\` says ${found}, and this date looks like the other order` : "";
}

/** A plain count 0, 1, 2, …: whole numbers, not all of them with the four digits of years or the six or eight of dates. */
function isCount(cells: readonly string[]): boolean {
  return /^[+-]?\d{1,9}$/.test(cells[0]) && cells.every((cell) => /^[+-]?\d{1,9}$/.test(cell)) && !cells.every((cell) => /^[+-]?(\d{4}|\d{6}|\d{8})$/.test(cell));
}

function decidedOrder(sheet: Sheet, cells: readonly string[]): DayOrder | null {
  const order = orderOf(cells);
  if (order === "both") {
    const line = sheet.rows[cells.findIndex((cell) => orderOf([cell]) === "month-day")].line;
    throw new OptionError("order", `${sheet.file} mixes orders of day and month: line ${line} can only be month first, others only day first; write the dates as 2019-03-05`);
  }
  if (order === "unsure") {
    const cell = cells.find((c) => orderOf([c]) !== null) ?? "";
    throw new OptionError("order", `${sheet.file}: "${cell}" may be day first or month first, and no date in the file decides; say order: "day-month" or order: "month-day"`);
  }
  return order;
}

/** Several columns as one text: year, month (or quarter, week) and day; or a date and a clock time. */
function joined(sheet: Sheet, cells: readonly string[], columns: readonly number[], line: number): string {
  const texts = columns.map((c) => cells[c] ?? "");
  if (texts.length === 1) return texts[0];
  if (texts.includes("")) throw new OptionError("time", `${sheet.file}, line ${line}: column "${sheet.columns[columns[texts.indexOf("")]]}" is empty, and the time is made of it`);
  if (!/^[+-]?\d{4}$/.test(texts[0])) {
    const clock = texts.slice(1).join(":");
    return `${texts[0]}T${/^\d{1,2}$/.test(clock) ? `${clock.padStart(2, "0")}:00` : clock.replace(/^(\d):/, "0$1:")}`;
  }
  const name = sheet.columns[columns[1]];
  const part = texts[1].replace(/^[QqWwMm]\s?/, "");
  const sign = /^[Qq]/.test(texts[1]) || /^(q|qtr|quarter)/i.test(name) ? "Q" : /^[Ww]\d/.test(texts[1]) || /^(w|wk|week)/i.test(name) ? "W" : "";
  const month = monthOfName(texts[1]);
  const middle = month === null ? (sign === "Q" ? `Q${part}` : `${sign}${part.padStart(2, "0")}`) : String(month).padStart(2, "0");
  const day = texts[2] === undefined ? "" : `-${texts[2].padStart(2, "0")}`;
  const rest = texts[3] === undefined ? "" : `T${texts[3].padStart(2, "0")}${texts[3].includes(":") ? "" : ":00"}`;
  return `${texts[0]}-${middle}${day}${rest}`;
}

