// A data file as named columns of cells, with what is needed to read numbers out of them.

import { parseRows, separatorOf, type Row } from "./csv.ts";
import { decode } from "./decode.ts";
import { decimalOf, numberOf, type Decimal } from "./numbers.ts";
import { isArchive, spreadsheetRows } from "./spreadsheet.ts";
import { orderOf, timeOf } from "./times.ts";

/** Columns of a file. `rows` are the data rows, the header left out. */
export interface Sheet {
  readonly file: string;
  readonly columns: readonly string[];
  readonly rows: readonly Row[];
  readonly decimal: Decimal;
  readonly missing: ReadonlySet<string>;
  /** Whether the first row named the columns. */
  readonly named: boolean;
  readonly notes: readonly string[];
}

/** Texts that stand for a missing value unless the author says otherwise. */
export const usualMissing: readonly string[] = ["", "NA", "NaN", "."];

/** Reads a data file: a sheet of a spreadsheet, or separated text.
 *  @param wanted  name of the sheet
 *  @throws RangeError in words that name file and line */
export async function readSheet(bytes: Uint8Array, file: string, missing?: readonly string[], wanted?: string): Promise<Sheet> {
  if (isArchive(bytes)) {
    const { rows, notes } = await spreadsheetRows(bytes, file, wanted);
    return sheetFrom(rows, file, missing, notes, () => ({ decimal: ".", unsure: null }));
  }
  const text = decode(bytes, file), separator = separatorOf(text);
  return sheetFrom(parseRows(text, separator, file), file, missing, [], (cells) => decimalOf(cells, separator));
}

function sheetFrom(all: readonly Row[], file: string, missing: readonly string[] | undefined, said: readonly string[], decimals: (cells: Iterable<string>) => ReturnType<typeof decimalOf>): Sheet {
  const notes = [...said];
  const remarks = all.findIndex((row) => !row.cells[0].startsWith("#"));
  const rows = remarks < 0 ? [] : all.slice(remarks);
  if (remarks > 0) notes.push(`${remarks} line${remarks > 1 ? "s" : ""} at the top of ${file} begin${remarks > 1 ? "" : "s"} with # and ${remarks > 1 ? "are" : "is"} left out`);
  if (rows.length === 0) throw new RangeError(`${file} has no rows to read: it holds ${all.length > 0 ? "remarks only" : "white space only"}`);
  const tokens = new Set(missing ?? usualMissing).add("");
  const named = isHeader(rows[0], tokens);
  const body = named ? rows.slice(1) : rows;
  if (body.length === 0) throw new RangeError(`${file} has a header and no rows below it`);
  const width = named ? lastFilled(rows[0]) : Math.max(...rows.slice(0, 50).map(lastFilled));
  const columns = named ? headerNames(rows[0].cells.slice(0, width)) : Array.from({ length: width }, (_, i) => `column ${i + 1}`);
  for (const row of body) {
    if (lastFilled(row) > width) throw new RangeError(`${file}, line ${row.line}: ${lastFilled(row)} cells, where ${named ? "the header has" : "the rows before have"} ${width}; look for a stray separator, or put quotes around a text that holds one`);
  }
  const { decimal, unsure } = decimals(cellsOf(body));
  if (unsure !== null) notes.push(`${file}: "${unsure}" is read as ${numberOf(unsure, decimal)}, with a ${decimal === "," ? "decimal comma" : "comma that groups thousands"}; nothing in the file says otherwise`);
  if (!named) notes.push(`${file} has no header: its columns are called "column 1", "column 2", …`);
  return { file, columns, rows: body, decimal, missing: tokens, named, notes };
}

/** A cell of a row; empty where the row is short. */
export function cellOf(row: Row, column: number): string {
  return row.cells[column] ?? "";
}

/** Whether a column holds numbers: most of what is in its first rows reads as one. */
export function isNumeric(sheet: Sheet, column: number): boolean {
  let numbers = 0, others = 0;
  for (const row of sheet.rows.slice(0, 5000)) {
    const cell = cellOf(row, column);
    if (sheet.missing.has(cell)) continue;
    if (numberOf(cell, sheet.decimal) === null) others++;
    else numbers++;
  }
  return numbers > 0 && numbers >= others;
}

/** A header has words: no cell of it is a number, a time or (all but empty) missing. */
function isHeader(first: Row, missing: ReadonlySet<string>): boolean {
  const cells = first.cells.filter((cell) => cell !== "");
  return cells.length > 0 && !cells.some((cell) => missing.has(cell) || numberOf(cell, ".") !== null || numberOf(cell, ",") !== null || looksLikeTime(cell));
}

/** Whether a cell has the form of a time, right or wrong. */
export function looksLikeTime(cell: string): boolean {
  try {
    const order = orderOf([cell]);
    return order !== null || timeOf(cell, null) !== null;
  } catch {
    return true;
  }
}

function lastFilled(row: Row): number {
  let n = row.cells.length;
  while (n > 0 && row.cells[n - 1] === "") n--;
  return n;
}

function headerNames(cells: readonly string[]): string[] {
  return cells.map((cell, i) => (cell === "" ? `column ${i + 1}` : cell));
}

function* cellsOf(rows: readonly Row[]): Iterable<string> {
  for (const row of rows) yield* row.cells;
}
