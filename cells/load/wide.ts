// Files with one row a year and a column for each month or quarter, turned to one row a period.

import { cellOf, type Sheet } from "./sheet.ts";
import { monthOfName } from "./times.ts";

/** The same values with one row a period, in the columns "period" and "value"; null where the file is not laid out across the year. */
export function acrossTheYear(sheet: Sheet): Sheet | null {
  const { columns, rows } = sheet;
  const year = columns.findIndex((_, column) => rows.every((row) => /^[+-]?\d{4}$/.test(cellOf(row, column))));
  const months = columns.flatMap((name, column) => { const m = monthOfName(name); return m === null ? [] : [{ column, part: String(m).padStart(2, "0") }]; });
  const quarters = columns.flatMap((name, column) => (/^[Qq][1-4]$/.test(name) ? [{ column, part: `Q${name[1]}` }] : []));
  const parts = months.length === 12 ? months : quarters.length === 4 ? quarters : null;
  if (!sheet.named || year < 0 || parts === null || new Set(parts.map((p) => p.part)).size !== parts.length) return null;
  const long = rows.flatMap((row) => parts.map(({ column, part }) => ({ line: row.line, cells: [`${cellOf(row, year)}-${part}`, cellOf(row, column)] })));
  // Empty cells before the first value and after the last are months that were not, or not yet, observed.
  let from = 0, end = long.length;
  while (end > 0 && sheet.missing.has(long[end - 1].cells[1])) end--;
  while (from < end && sheet.missing.has(long[from].cells[1])) from++;
  if (from === end) return null;
  const what = parts === months ? "months" : "quarters";
  return { ...sheet, columns: ["period", "value"], rows: long.slice(from, end), notes: [...sheet.notes, `${sheet.file} has one row a year; it is read across its columns of ${what}`] };
}
