// The rows of a sheet of a spreadsheet in Office Open XML (ECMA-376), the form of files that end in .xlsx.

import { archiveOf, type Archive } from "./archive.ts";
import type { Row } from "./csv.ts";

export interface SheetRows { readonly rows: readonly Row[]; readonly notes: readonly string[] }

/** Whether a file is an archive, as spreadsheets are. */
export function isArchive(bytes: Uint8Array): boolean {
  return bytes[0] === 0x50 && bytes[1] === 0x4b && bytes[2] === 3 && bytes[3] === 4;
}

/** Rows of a sheet, those of empty cells left out, each cell as a text file would have it: numbers plain, dates in ISO 8601.
 *  @param wanted  name of the sheet; the first unless given
 *  @throws RangeError in words that begin with the file's name */
export async function spreadsheetRows(bytes: Uint8Array, file: string, wanted: string | undefined): Promise<SheetRows> {
  const archive = archiveOf(bytes, file);
  if (!archive.names.includes("xl/workbook.xml")) throw new RangeError(`${file} is ${archive.names.includes("mimetype") ? "a document of another form" : "an archive"}, not a spreadsheet that can be read; save the data as .xlsx or CSV and name that file`);
  const workbook = await text(archive, "xl/workbook.xml"), sheets = elements(workbook, "sheet").map(({ attributes }) => ({ name: attributes.get("name") ?? "", id: attributes.get("r:id") ?? [...attributes].find(([key]) => key.endsWith(":id"))?.[1] ?? "" }));
  const sheet = wanted === undefined ? sheets.at(0) : sheets.find(({ name }) => name === wanted);
  const list = sheets.map(({ name }) => `"${name}"`).join(", ");
  if (sheet === undefined) throw new RangeError(wanted === undefined ? `${file} has no sheets` : `${file} has no sheet "${wanted}"; its sheets are ${list}`);
  const targets = new Map(elements(await text(archive, "xl/_rels/workbook.xml.rels"), "Relationship").map(({ attributes }) => [attributes.get("Id"), attributes.get("Target") ?? ""]));
  const target = targets.get(sheet.id) ?? "", path = target.startsWith("/") ? target.slice(1) : `xl/${target}`;
  const shared = archive.names.includes("xl/sharedStrings.xml") ? elements(await text(archive, "xl/sharedStrings.xml"), "si").map(({ inside }) => words(inside)) : [];
  const dated = archive.names.includes("xl/styles.xml") ? datedStyles(await text(archive, "xl/styles.xml")) : [];
  const start = /<workbookPr[^>]*date1904="(?:1|true)"/.test(workbook) ? Date.UTC(1904, 0, 1) : Date.UTC(1899, 11, 30);
  const rows = elements(await text(archive, path), "row").map(({ attributes, inside }, i) => ({ line: Number(attributes.get("r") ?? i + 1), cells: cellsOf(inside, shared, dated, start) }));
  const notes = wanted === undefined && sheets.length > 1 ? [`${file} has the sheets ${list}; the first is read, and \`sheet\` can name another`] : [];
  return { rows: withoutEmptyColumns(rows.filter((row) => row.cells.some((cell) => cell !== ""))), notes };
}

async function text(archive: Archive, name: string): Promise<string> {
  return new TextDecoder().decode(await archive.read(name));
}

interface Element { readonly attributes: ReadonlyMap<string, string>; readonly inside: string }

/** Elements of a name that do not hold one another, in their order; names may have a prefix. */
function elements(xml: string, name: string): Element[] {
  const open = new RegExp(`<(?:\\w+:)?${name}(?=[\\s/>])((?:[^>"']|"[^"]*"|'[^']*')*?)(/?)>`, "g"), close = new RegExp(`</(?:\\w+:)?${name}\\s*>`, "g");
  const found: Element[] = [];
  for (let match = open.exec(xml); match !== null; match = open.exec(xml)) {
    const attributes = new Map(Array.from(match[1].matchAll(/([\w:]+)\s*=\s*(?:"([^"]*)"|'([^']*)')/g), ([, key, double, single]) => [key, plain(double ?? single ?? "")]));
    if (match[2] === "/") { found.push({ attributes, inside: "" }); continue; }
    close.lastIndex = open.lastIndex;
    const end = close.exec(xml);
    found.push({ attributes, inside: xml.slice(open.lastIndex, end?.index ?? xml.length) });
    open.lastIndex = end === null ? xml.length : close.lastIndex;
  }
  return found;
}

/** The text of runs, without the readings that stand beside them in some scripts. */
function words(xml: string): string {
  return elements(xml.replace(/<(?:\w+:)?rPh[\s>][\s\S]*?<\/(?:\w+:)?rPh>/g, ""), "t").map(({ inside }) => plain(inside)).join("");
}

function plain(xml: string): string {
  const named: Readonly<Record<string, string>> = { amp: "&", lt: "<", gt: ">", quot: "\"", apos: "'" };
  return xml.replace(/&(?:#x([\da-fA-F]+)|#(\d+)|(\w+));/g, (all, hex: string | undefined, decimal: string | undefined, name: string | undefined) => (name === undefined ? String.fromCodePoint(hex === undefined ? Number(decimal) : parseInt(hex, 16)) : named[name] ?? all));
}

/** How numbers of a style are shown. */
type Shown = "number" | "day" | "time";

/** By style: whether its numbers are shown as days, or with a time of day. */
function datedStyles(xml: string): Shown[] {
  const own = new Map(elements(xml, "numFmt").map(({ attributes }) => [attributes.get("numFmtId"), attributes.get("formatCode") ?? ""]));
  const formats = elements(elements(xml, "cellXfs")[0]?.inside ?? "", "xf").map(({ attributes }) => attributes.get("numFmtId") ?? "0");
  return formats.map((id) => {
    // Built-in formats of dates and times, part 1, section 18.8.30; those of other scripts among them.
    const code = own.get(id)?.replace(/"[^"]*"|\[[^\]]*\]|\\./g, ""), n = Number(id);
    if (code === undefined) return (n >= 18 && n <= 22) || (n >= 45 && n <= 47) ? "time" : (n >= 14 && n <= 17) || (n >= 27 && n <= 36) || (n >= 50 && n <= 58) ? "day" : "number";
    return /h/i.test(code) ? "time" : /[ymds]/i.test(code) ? "day" : "number";
  });
}

function cellsOf(row: string, shared: readonly string[], dated: readonly Shown[], start: number): string[] {
  const cells: string[] = [];
  for (const { attributes, inside } of elements(row, "c")) {
    const column = columnOf(attributes.get("r")) ?? cells.length, value = plain(elements(inside, "v")[0]?.inside ?? "");
    while (cells.length < column) cells.push("");
    cells[column] = cellText(attributes.get("t") ?? "n", value, inside, shared, dated[Number(attributes.get("s") ?? -1)] ?? "number", start).trim();
  }
  return cells;
}

/** @example columnOf("AB7") // 27 */
function columnOf(reference: string | undefined): number | null {
  const letters = /^[A-Z]{1,3}/.exec(reference ?? "")?.[0];
  return letters === undefined ? null : [...letters].reduce((sum, letter) => 26 * sum + letter.charCodeAt(0) - 64, 0) - 1;
}

function cellText(type: string, value: string, inside: string, shared: readonly string[], shown: Shown, start: number): string {
  if (type === "s") return shared[Number(value)] ?? "";
  if (type === "inlineStr") return words(inside);
  if (type !== "n" || value === "") return value;
  const number = Number(value);
  return shown !== "number" && Number.isFinite(number) ? dateText(start, number, shown) : String(number);
}

/** Days since the start as ISO 8601, to the second. Day 60 of 1900, which there was not, shifts the days before it by one. */
function dateText(start: number, days: number, shown: Shown): string {
  const shifted = start === Date.UTC(1899, 11, 30) && days < 60 ? days + 1 : days;
  const iso = new Date(start + Math.round(shifted * 86_400) * 1000).toISOString();
  return shown === "day" && iso.endsWith("T00:00:00.000Z") ? iso.slice(0, 10) : iso.slice(0, 19);
}

/** Data need not begin in the first column. */
function withoutEmptyColumns(rows: readonly Row[]): Row[] {
  const width = rows.reduce((most, row) => Math.max(most, row.cells.length), 0);
  const kept = Array.from({ length: width }, (_, c) => c).filter((c) => rows.some((row) => (row.cells[c] ?? "") !== ""));
  return rows.map(({ line, cells }) => ({ line, cells: kept.map((c) => cells[c] ?? "") }));
}
