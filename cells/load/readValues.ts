// The values of one column on the grid, with what was missing, repeated or no number.

import { timeAt } from "../../stdlib/index.ts";
import { OptionError } from "../kind.ts";
import type { Grid } from "./grid.ts";
import { numberOf } from "./numbers.ts";
import { cellOf, looksLikeTime, type Sheet } from "./sheet.ts";

export interface ColumnValues {
  readonly values: Float64Array;
  /** Rows that say the same about a period as an earlier row. */
  readonly repeated: number;
  /** Cells that say "missing". */
  readonly missing: number;
}

/** @throws OptionError naming file, line and column of the first cell that is no number, or of rows that contradict each other */
export function readValues(sheet: Sheet, column: number, grid: Grid): ColumnValues {
  const values = new Float64Array(grid.n).fill(NaN);
  const rowOf = new Int32Array(grid.n).fill(-1);
  let repeated = 0, missing = 0;
  sheet.rows.forEach((row, i) => {
    const cell = cellOf(row, column);
    const value = sheet.missing.has(cell) ? NaN : numberOf(cell, sheet.decimal);
    if (value === null) throw notANumber(sheet, column, i);
    if (Number.isNaN(value)) missing++;
    const k = grid.positions[i];
    if (rowOf[k] >= 0) {
      if (!Object.is(values[k], value)) throw contradiction(sheet, column, grid, rowOf[k], i);
      repeated++;
    }
    values[k] = value;
    rowOf[k] = i;
  });
  return { values, repeated, missing };
}

function notANumber(sheet: Sheet, column: number, at: number): OptionError {
  const cell = cellOf(sheet.rows[at], column);
  const others = new Set<string>();
  let count = 0;
  for (const row of sheet.rows) {
    const text = cellOf(row, column);
    if (sheet.missing.has(text) || numberOf(text, sheet.decimal) !== null) continue;
    count++;
    others.add(text);
  }
  const name = sheet.columns[column];
  const more = count > 1 ? ` (and ${count - 1} more such cell${count > 2 ? "s" : ""})` : "";
  const option = others.size <= 5 && ![...others].some((text) => /\d/.test(text))
    ? `; if ${others.size > 1 ? "these stand" : "it stands"} for a missing value, say missing: [${[...others].map((text) => JSON.stringify(text)).join(", ")}]`
    : `; write the number plainly${sheet.decimal === "," ? " (the file uses a decimal comma)" : ""}, or leave the cell empty where it is missing`;
  return new OptionError("value", `${sheet.file}, line ${sheet.rows[at].line}, column "${name}": ${JSON.stringify(cell)} is not a number${more}${option}`);
}

function contradiction(sheet: Sheet, column: number, grid: Grid, a: number, b: number): OptionError {
  const time = timeAt(grid.start, grid.every, grid.positions[a]);
  const show = (i: number): string => cellOf(sheet.rows[i], column) || "nothing";
  return new OptionError("time", `${sheet.file}: lines ${sheet.rows[a].line} and ${sheet.rows[b].line} both give ${time}, one with ${show(a)} and one with ${show(b)} in column "${sheet.columns[column]}"; ${apart(sheet, column, a, b) ?? "keep one row a period"}`);
}

/** Several series below one another: what tells two rows of one period apart. */
function apart(sheet: Sheet, column: number, a: number, b: number): string | null {
  const text = (row: number, c: number): string => cellOf(sheet.rows[row], c);
  const by = sheet.columns.findIndex((_, c) => c !== column && text(a, c) !== text(b, c) && [text(a, c), text(b, c)].every((cell) => cell !== "" && numberOf(cell, sheet.decimal) === null && !looksLikeTime(cell)));
  return by < 0 ? null : `they differ in column "${sheet.columns[by]}" (${JSON.stringify(text(a, by))}, ${JSON.stringify(text(b, by))}): the file holds several series below one another; give each a column of its own`;
}
