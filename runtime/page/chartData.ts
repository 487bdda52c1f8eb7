// A chart's columns as rows, and as CSV at full precision.

import type { ChartPart, Column, Columns, TablePart } from "../../cells/parts/part.ts";

export type Row = Record<string, number | string | boolean | null>;

/** Row objects for the chart library. NaN becomes null, which it leaves out as missing. */
export function rowsOf(columns: Columns): Row[] {
  const names = Object.keys(columns);
  const n = names.reduce((most, name) => Math.max(most, columns[name].length), 0);
  const rows: Row[] = [];
  for (let i = 0; i < n; i++) {
    const row: Row = {};
    for (const name of names) { const value = columns[name][i]; row[name] = value === undefined || Number.isNaN(value) ? null : value; }
    rows.push(row);
  }
  return rows;
}

/** Fields that the specification reads as times, wherever they stand in it. */
export function timeFields(spec: unknown, found: Set<string> = new Set()): Set<string> {
  if (Array.isArray(spec)) { for (const item of spec) timeFields(item, found); return found; }
  if (typeof spec !== "object" || spec === null) return found;
  const one = spec as { type?: unknown; field?: unknown };
  if (one.type === "temporal" && typeof one.field === "string") found.add(one.field);
  for (const value of Object.values(spec)) timeFields(value, found);
  // A span's second end shares the first one's type.
  const encoding = spec as Record<string, { type?: unknown; field?: unknown } | undefined>;
  for (const axis of ["x", "y"]) if (encoding[axis]?.type === "temporal" && typeof encoding[`${axis}2`]?.field === "string") found.add(encoding[`${axis}2`]?.field as string);
  return found;
}

/** The data sets behind a chart, with times as ISO 8601 texts: the full ones where it has them, else those that are drawn. */
export function columnsBehind(part: ChartPart): Readonly<Record<string, Columns>> {
  const times = timeFields(part.spec);
  const sets: Record<string, Columns> = {};
  for (const [set, columns] of Object.entries(part.full ?? part.data)) {
    sets[set] = Object.fromEntries(Object.entries(columns).map(([name, column]) => [name, times.has(name) ? timeTexts(column) : column]));
  }
  return sets;
}

/** UTC milliseconds as ISO texts, as short as all of them allow. */
export function timeTexts(column: Column): readonly (string | null)[] {
  const dates = Array.from(column as ArrayLike<unknown>, (value) => typeof value === "number" && Number.isFinite(value) ? new Date(value) : null);
  const known = dates.filter((date) => date !== null);
  const midnight = known.every((date) => date.getTime() % 86_400_000 === 0);
  const firsts = midnight && known.every((date) => date.getUTCDate() === 1);
  const januaries = firsts && known.length > 1 && known.every((date) => date.getUTCMonth() === 0);
  // "2019-03-01T00:00:00.000Z": the year may have a sign and six digits, so cut from the end.
  const cut = januaries ? -20 : firsts ? -17 : midnight ? -14 : -8;
  return dates.map((date, i) => { const raw = column[i]; return date ? date.toISOString().slice(0, cut) + (midnight ? "" : "Z") : typeof raw === "string" ? raw : null; });
}

/** Several data sets as one table; with more than one, the first column says which. */
export function columnsTable(sets: Readonly<Record<string, Columns>>): { readonly columns: readonly string[]; readonly rows: TablePart["rows"] } {
  const names = Object.keys(sets);
  const fields = [...new Set(names.flatMap((set) => Object.keys(sets[set])))];
  const rows = names.flatMap((set) => rowsOf(sets[set]).map((row) => [...(names.length > 1 ? [set] : []), ...fields.map((field) => row[field] ?? null)]));
  return { columns: names.length > 1 ? ["data", ...fields] : fields, rows };
}

/** RFC 4180 text. Numbers are printed so that reading them gives the same bits; missing ones are empty. */
export function csv(columns: readonly string[], rows: TablePart["rows"]): string {
  const cell = (value: number | string | boolean | null): string => {
    if (value === null || (typeof value === "number" && Number.isNaN(value))) return "";
    const text = Object.is(value, -0) ? "-0" : String(value);
    return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
  };
  return `${[columns, ...rows].map((row) => row.map(cell).join(",")).join("\r\n")}\r\n`;
}

export function chartCsv(part: ChartPart): string { const { columns, rows } = columnsTable(columnsBehind(part)); return csv(columns, rows); }

export function tableCsv(part: TablePart): string { return csv(part.columns.map(({ title, unit }) => unit ? `${title} (${unit})` : title), part.rows); }
