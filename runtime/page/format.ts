// How numbers are printed on the page: the one door to d3-format here.

import { format } from "d3-format";

const minus = "−";
const dash = "–";

/** A number by a d3-format pattern; a missing one as a dash; without a pattern, at most six significant digits. */
export function printNumber(value: number, pattern?: string): string {
  if (Number.isNaN(value)) return dash;
  if (value === Infinity) return "∞";
  if (value === -Infinity) return `${minus}∞`;
  if (pattern === undefined || pattern === "") return plain(value);
  try { return format(pattern)(value); } catch { return plain(value); }
}

/** Whatever stands in a table's cell or beside a label. */
export function printValue(value: number | string | boolean | null | undefined, pattern?: string): string {
  if (value === null || value === undefined) return dash;
  if (typeof value === "boolean") return value ? "yes" : "no";
  return typeof value === "number" ? printNumber(value, pattern) : value;
}

function plain(value: number): string {
  if (Number.isInteger(value) && Math.abs(value) < 1e15) return (value < 0 ? minus : "") + format(Math.abs(value) >= 10_000 ? ",d" : "d")(Math.abs(value));
  return format(Math.abs(value) >= 10_000 ? ",.6~r" : ".6~g")(value);
}

/** A field as the text of a live number: short enough to read, exact enough to mean something; never grouped or with a printed minus. */
export function fieldText(value: number | string | boolean): string {
  if (typeof value !== "number") return String(value);
  if (!Number.isFinite(value)) return String(value);
  if (Number.isInteger(value)) return String(value);
  const digits = Math.max(0, 3 - Math.floor(Math.log10(Math.abs(value))));
  return digits > 5 ? value.toPrecision(4) : value.toFixed(Math.min(digits, 4) || 1);
}
