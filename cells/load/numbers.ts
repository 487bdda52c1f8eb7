// Numbers as people write them in data files: decimal point or comma, grouped thousands.

import type { Separator } from "./csv.ts";
import { monthPointYear } from "./times.ts";

export type Decimal = "." | ",";

const minus = /^[-−–]/;
const grouping = /[\s\u00a0\u202f'’_]/g;
const pointNumber = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/;
const commaGroups = /^[+-]?\d{1,3}(?:,\d{3})+(?:\.\d*)?$/;
const pointGroups = /^[+-]?\d{1,3}(?:\.\d{3})+(?:,\d*)?$/;

/** A number of a cell; null where the text is none. Empty text is null too. */
export function numberOf(cell: string, decimal: Decimal): number | null {
  if (decimal === "." && pointNumber.test(cell)) return finite(cell); // nearly every cell of nearly every file
  let text = cell.replace(minus, "-");
  if (/[\s\u00a0\u202f'’_]/.test(text)) {
    if (!/^[+-]?\d{1,3}(?:[\s\u00a0\u202f'’_]\d{3})+(?:[.,]\d*)?$/.test(text)) return null;
    text = text.replace(grouping, "");
  }
  if (decimal === ",") {
    if (pointGroups.test(text)) text = text.replaceAll(".", "");
    if (text.includes(".")) return null;
    text = text.replace(",", ".");
  } else if (commaGroups.test(text)) text = text.replaceAll(",", "");
  return pointNumber.test(text) ? finite(text) : null;
}

/** A number too large for a double is none. */
function finite(text: string): number | null {
  const value = Number(text);
  return Number.isFinite(value) ? value : null;
}

/** Which decimal sign a file uses, from all cells that could be numbers; and a cell that could be read either way where nothing
 *  in the file decides. Between semicolons a comma is then a decimal sign, elsewhere it groups thousands. */
export function decimalOf(cells: Iterable<string>, separator: Separator): { readonly decimal: Decimal; readonly unsure: string | null } {
  let comma = 0, point = 0;
  let unsure: string | null = null;
  for (const cell of cells) {
    if (!cell.includes(",") && !cell.includes(".")) continue;
    if (!/^[-+−–]?[\d\s\u00a0\u202f'’.,]+$/.test(cell) || !/\d/.test(cell)) continue;
    if (monthPointYear.test(cell)) continue;
    const commas = cell.split(",").length - 1, points = cell.split(".").length - 1;
    if (commas > 0 && points > 0) { if (cell.lastIndexOf(",") > cell.lastIndexOf(".")) comma++; else point++; continue; }
    if (commas > 1) { point++; continue; } // 1,234,567 is grouped by commas
    if (points > 1) continue; // 5.3.2019 is a date; 1.234.567 settles only with the rest of the file
    if (commas === 1) {
      if (/^[-+−–]?\d{1,3},\d{3}$/.test(cell)) unsure ??= cell;
      else comma++;
    } else point++;
  }
  if (comma > 0 && point > 0) return { decimal: comma > point ? "," : ".", unsure: null };
  if (comma > 0) return { decimal: ",", unsure: null };
  if (point > 0) return { decimal: ".", unsure: null };
  return { decimal: unsure !== null && separator === ";" ? "," : ".", unsure };
}
