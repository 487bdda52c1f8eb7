// Edits that the page may ask for. Each changes the bytes it names and no others.

import { literalOf } from "./expression.ts";
import { formatLike } from "./live.ts";
import type { LiveValue } from "./live.ts";
import type { CellText, Edit, Notebook, Shape } from "./notebook.ts";

/** Edits in the order of the text, none overlapping; or why there are none. */
export type EditOutcome = { readonly edits: readonly Edit[] } | { readonly refused: string };

/** The text after edits. */
export function applyEdits(text: string, edits: readonly Edit[]): string {
  return [...edits].sort((a, b) => b.from - a.from).reduce((now, edit) => now.slice(0, edit.from) + edit.insert + now.slice(edit.to), text);
}

/** Keeps a moved control's setting: rewrites its literal `at` (or `from`, `to`), or adds the line where there is none.
 *  @param name     the control's name
 *  @param setting  the value itself; for a control that keeps several options, an object of them
 *  Refused where the option is an expression, for then something else decides it. */
export function keepSetting(notebook: Notebook, shapes: readonly Shape[], name: string, setting: unknown): EditOutcome {
  const cell = notebook.cells.find((each) => each.name === name);
  if (cell === undefined) return { refused: `There is no control \`${name}\` in the text` };
  const keeps = shapes.find((shape) => shape.name === cell.kind)?.control?.keeps;
  if (keeps === undefined) return { refused: `\`${name}\` is not a control` };
  const edits: Edit[] = [];
  for (const option of keeps) {
    const value = keeps.length === 1 ? setting : partOf(setting, option);
    if (value === undefined) continue;
    const written = cell.options.find((each) => each.name === option);
    if (written !== undefined && literalOf(written.source) === undefined) {
      return { refused: `\`${option}\` of \`${name}\` is the expression \`${written.source}\`, not a fixed value: change it in the text` };
    }
    const source = literal(value, written?.source ?? "");
    if (source === null) return { refused: `The setting of \`${name}\` cannot be written as a fixed value` };
    if (written !== undefined && literalOf(written.source) === value) continue;
    const outcome = setOption(notebook, cell.index, option, source);
    if ("refused" in outcome) return outcome;
    edits.push(...outcome.edits);
  }
  return { edits: merged(edits) };
}

/** Sets an option's expression, or adds the option as the last line of the cell. */
export function setOption(notebook: Notebook, cellIndex: number, option: string, source: string): EditOutcome {
  const cell = notebook.cells[cellIndex];
  if (cell === undefined) return { refused: "There is no such cell" };
  const written = cell.options.filter((each) => each.name === option);
  if (written.length > 1) return { refused: `\`${option}\` is given twice: remove one first` };
  if (written.length === 1) {
    const { from, to } = written[0].expression;
    const gap = from === to && notebook.text[from - 1] === ":" ? " " : "";
    return { edits: [{ from, to, insert: gap + source }] };
  }
  if (notebook.problems.some((each) => each.cell === cellIndex && ["unterminated-fence", "unclosed", "not-an-option", "syntax"].includes(each.code))) return { refused: "The cell has a fault that must be mended first" };
  return { edits: [{ from: cell.body.to, to: cell.body.to, insert: newLine(notebook.text, cell, `${option}: ${source}`) }] };
}

/** Accepts a live number's present value: rewrites the link's text in its own form (or by its pattern), and nothing else. */
export function acceptNumber(notebook: Notebook, index: number, value: LiveValue): EditOutcome {
  const number = notebook.numbers[index];
  if (number === undefined) return { refused: "There is no such number in the text" };
  if (typeof value === "number" && !Number.isFinite(value)) return { refused: "The value is missing, so there is nothing to write" };
  const { from, to } = number.savedPlace;
  const insert = escapeText(formatLike(number.saved, number.pattern, value));
  return { edits: notebook.text.slice(from, to) === insert ? [] : [{ from, to, insert }] };
}

/** Backslashes before what Markdown would read as a mark inside a link's text. */
function escapeText(text: string): string {
  return text.replace(/[\r\n]+/g, " ").replace(/[\\`*_[\]<>&$~|!#]/g, (mark, at: number) => (/[<>&]/.test(mark) && /[\s\d.]/.test(text[at + 1] ?? " ")) || (/[!#]/.test(mark) && text[at + 1] !== "[") ? mark : `\\${mark}`);
}

function partOf(setting: unknown, option: string): unknown {
  return typeof setting === "object" && setting !== null && Object.hasOwn(setting, option) ? (setting as Readonly<Record<string, unknown>>)[option] : undefined;
}

/** A value as source, with the quotes that the author used; null for what is no literal. */
function literal(value: unknown, before: string): string | null {
  if (typeof value === "boolean") return String(value);
  if (typeof value === "number") return Number.isFinite(value) ? String(value) : null;
  if (typeof value !== "string") return null;
  if (before.startsWith("'")) return `'${JSON.stringify(value).slice(1, -1).replaceAll("\\\"", "\"").replaceAll("'", "\\'")}'`;
  return JSON.stringify(value);
}

/** A line at the end of a body, indented as the fence is, with the line break that the text uses. */
function newLine(text: string, cell: CellText, line: string): string {
  const breaks = text.includes("\r\n") ? "\r\n" : "\n";
  const indent = /^[ \t]*/.exec(text.slice(cell.body.to))?.[0] ?? "";
  const starts = cell.body.to === 0 || /[\r\n]/.test(text[cell.body.to - 1]);
  return `${starts ? "" : breaks}${indent}${line}${breaks}`;
}

/** Insertions at one place become one edit, so that edits never overlap. */
function merged(edits: readonly Edit[]): Edit[] {
  const found: Edit[] = [];
  for (const edit of [...edits].sort((a, b) => a.from - b.from)) {
    const last = found.at(-1);
    if (last !== undefined && last.from === edit.from && last.to === edit.to && edit.from === edit.to) found[found.length - 1] = { ...last, insert: last.insert + edit.insert };
    else found.push(edit);
  }
  return found;
}
