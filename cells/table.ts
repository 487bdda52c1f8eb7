// Rows as a table.

import { isSeries } from "../stdlib/index.ts";
import { OptionError, type Kind } from "./kind.ts";
import type { TableColumn, TablePart } from "./parts/part.ts";
import { cellOf, rowsOf, type Cell } from "./parts/rows.ts";

export interface TableCell { readonly rows: unknown; readonly columns?: readonly string[] | Readonly<Record<string, string>> }

export const table: Kind<TableCell, TablePart> = {
  name: "table",
  sentence: "Rows as a table.",
  options: {
    rows: { type: "rows", required: true, sentence: "A list of objects, a series, a forecast, or an object of columns.", example: "contest.scores" },
    columns: { type: { anyOf: [{ listOf: "text" }, "object"] }, sentence: "Fields to show, in order: a list of names, or an object {\"heading\": \"field\"}; a field may be a path such as \"fit.aicc\"." },
  },
  body: "options",
  example: "rows: contest.scores",
  run: ({ rows, columns }) => tablePart(rows, columns),
  show: (result) => [result],
};

function tablePart(value: unknown, wanted: TableCell["columns"]): TablePart {
  try {
    return wanted === undefined ? allColumns(value) : chosenColumns(value, wanted);
  } catch (error) {
    if (error instanceof RangeError) throw new OptionError("rows", error.message);
    throw error;
  }
}

function allColumns(value: unknown): TablePart {
  if (isSeries(value)) {
    const title = value.unit === "" ? value.name || "value" : `${value.name || "value"} (${value.unit})`;
    return built([{ title: value.every === null ? "number" : "period", cells: value.times }, { title, cells: Array.from(value.values) }], value.n);
  }
  const { columns, n, times } = rowsOf(value);
  // Milliseconds are for charts; a reader has the period beside them.
  const names = Object.keys(columns).filter((name) => !(name in columns && times.includes(name) && "period" in columns) && !(name === "time" && "period" in columns));
  return built(names.map((name) => ({ title: name, cells: Array.from(columns[name]) })), n);
}

function chosenColumns(value: unknown, wanted: readonly string[] | Readonly<Record<string, string>>): TablePart {
  const pairs = Array.isArray(wanted) ? wanted.map((name: string) => [name, name] as const) : Object.entries(wanted as Readonly<Record<string, unknown>>);
  const list = Array.isArray(value) ? value as readonly unknown[] : null;
  const rows = list === null ? rowsOf(value) : null;
  const n = list?.length ?? rows?.n ?? 0;
  const columns = pairs.map(([title, field]) => {
    if (typeof field !== "string") throw new OptionError("columns", `\`columns\` gives ${String(field)} under "${title}", where the name of a field belongs`);
    if (list !== null) return { title, cells: list.map((row, i) => pathOf(row, field, i)) };
    if (rows === null || !Object.hasOwn(rows.columns, field)) throw new OptionError("columns", `the rows have no field "${field}"; they have ${Object.keys(rows?.columns ?? {}).join(", ")}`);
    return { title, cells: Array.from(rows.columns[field]) };
  });
  return built(columns, n);
}

/** The value at a path of names; absent in one row is an empty cell, absent in the first a slip. */
function pathOf(row: unknown, path: string, index: number): Cell {
  let value: unknown = row;
  for (const key of path.split(".")) {
    const there = typeof value === "object" && value !== null && Object.hasOwn(value, key);
    if (!there && index === 0) throw new OptionError("columns", `the rows have no field "${path}"${typeof row === "object" && row !== null ? `; they have ${Object.keys(row).slice(0, 15).join(", ")}` : ""}`);
    if (!there) return null;
    value = (value as Record<string, unknown>)[key];
  }
  return cellOf(value);
}

function built(columns: readonly { readonly title: string; readonly cells: readonly Cell[] }[], n: number): TablePart {
  return {
    part: "table",
    columns: columns.map(({ title, cells }): TableColumn => (isNumbers(cells) ? { title, align: "right", format: formatFor(cells) } : { title })),
    rows: Array.from({ length: n }, (_, i) => columns.map(({ cells }) => cells[i] ?? null)),
  };
}

function isNumbers(cells: readonly Cell[]): boolean {
  return cells.some((cell) => typeof cell === "number") && cells.every((cell) => typeof cell === "number" || cell === null);
}

/** Whole numbers plainly; otherwise as many decimals as give the middle value four digits, or fewer where none needs them. */
function formatFor(cells: readonly Cell[]): string {
  const sizes = cells.filter((cell): cell is number => typeof cell === "number" && Number.isFinite(cell)).map(Math.abs);
  if (sizes.every(Number.isInteger)) return ",d";
  const middle = sizes.filter((v) => v > 0).sort((a, b) => a - b)[Math.floor(sizes.filter((v) => v > 0).length / 2)] ?? 1;
  const needed = Math.max(...sizes.map(decimalsOf));
  const decimals = Math.min(needed, 8, Math.max(0, 3 - Math.floor(Math.log10(middle))));
  return `,.${decimals}f`;
}

/** Decimals of a number as it is written in up to twelve digits. */
function decimalsOf(value: number): number {
  const [mantissa, exponent = "0"] = String(Number(value.toPrecision(12))).split("e");
  return Math.max(0, (mantissa.split(".")[1] ?? "").length - Number(exponent));
}
