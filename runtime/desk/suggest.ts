// What may stand at a place of the text: kinds, options, values, names of cells, library functions, with their help.

import type { OptionType } from "../../cells/kind.ts";
import type { Catalogue, KindEntry } from "./catalogue.ts";
import { contextAt } from "./context.ts";
import { optionHelp } from "./help.ts";

/** A cell of the notebook, as far as the editor needs it. */
export interface NamedCell { readonly name: string; readonly kind: string; readonly state: string }

export interface Suggestion {
  readonly label: string;
  /** A word or two beside the label. */
  readonly detail: string;
  readonly help: string;
  readonly sort: "kind" | "option" | "value" | "cell" | "function" | "constant";
  /** Text to insert; `${…}` marks what the author will fill in. */
  readonly insert: string;
}

export interface Suggestions { readonly from: number; readonly list: readonly Suggestion[] }

/** Suggestions for the place `position`; null where there is nothing to say.
 *  @param asked  the author asked for them: answered also before a first letter */
export function suggest(text: string, position: number, catalogue: Catalogue, cells: readonly NamedCell[], asked: boolean): Suggestions | null {
  const context = contextAt(text, position);
  switch (context.in) {
    case "prose": return null;
    case "fence": return /^\s*[A-Za-z]*$/.test(context.typed) ? { from: position - context.typed.trimStart().length, list: catalogue.kinds.map((kind) => kindSuggestion(kind, restOfLine(text, position), cells)) } : null;
    case "option": {
      const kind = catalogue.kinds.find((entry) => entry.name === context.kind);
      if (!kind || kind.body === "claims" || kind.body === "code") return null;
      if (position === context.from && !asked) return null;
      return { from: context.from, list: optionSuggestions(kind, context.given) };
    }
    case "number": return inExpression(text, position, context.expression, null, catalogue, cells, asked);
    case "expression": {
      const kind = catalogue.kinds.find((entry) => entry.name === context.kind);
      const type = context.option === null ? null : kind?.options[context.option]?.type ?? null;
      return kind?.body === "code" ? null : inExpression(text, position, context.expression, type, catalogue, cells, asked);
    }
  }
}

function kindSuggestion(kind: KindEntry, rest: string, cells: readonly NamedCell[]): Suggestion {
  const name = `\${${freeName(kind.name, cells)}}`;
  const body = rest.trim() === "" ? `\n${kind.example.trimEnd().replaceAll("$", "\\$")}\n\`\`\`` : "";
  return { label: kind.name, detail: "cell", help: kind.sentence, sort: "kind", insert: rest.trim() === "" ? `${kind.name}: ${name}${body}` : kind.name };
}

/** What follows on the line and, where only a bare fence was typed, whether a body is there already. */
function restOfLine(text: string, position: number): string {
  const end = text.indexOf("\n", position);
  const after = end < 0 ? "" : text.slice(end + 1);
  const closing = /^(`{3,}|~{3,})\s*$/m.exec(after), opening = /^(`{3,}|~{3,})\s*\S/m.exec(after);
  const closedAlready = closing !== null && (opening === null || closing.index < opening.index);
  return (end < 0 ? text.slice(position) : text.slice(position, end)) || (closedAlready ? "…" : "");
}

function freeName(kind: string, cells: readonly NamedCell[]): string {
  for (let count = 1; ; count++) {
    const name = `${kind}${count}`;
    if (!cells.some((cell) => cell.name === name)) return name;
  }
}

function optionSuggestions(kind: KindEntry, given: readonly string[]): readonly Suggestion[] {
  return Object.entries(kind.options).filter(([name]) => !given.includes(name)).map(([name, option]) => ({
    label: name, detail: option.required ? "required" : "option", help: optionHelp(option), sort: "option" as const,
    insert: `${name}: \${${(option.example ?? "").replace(/[{}$]/g, "\\$&")}}`,
  }));
}

function inExpression(text: string, position: number, start: number, type: OptionType | null, catalogue: Catalogue, cells: readonly NamedCell[], asked: boolean): Suggestions | null {
  const before = text.slice(start, position);
  if (insideText(before)) return null;
  const word = /(?:rule\.)?[A-Za-z_$][\w$]*$/.exec(before)?.[0] ?? "";
  const lead = before.slice(0, before.length - word.length);
  if (word === "" && !asked) return null;
  if (lead.endsWith(".")) return null;
  const values = type === null ? [] : choices(type).map((value): Suggestion => ({ label: JSON.stringify(value), detail: "value", help: "", sort: "value", insert: JSON.stringify(value) }));
  const names = cells.map((cell): Suggestion => ({ label: cell.name, detail: cell.kind, help: `The ${cell.kind} cell “${cell.name}” (${cell.state}).`, sort: "cell", insert: cell.name }));
  const functions = catalogue.functions.map((entry): Suggestion => ({
    label: entry.name, detail: entry.signature.slice(entry.name.length), help: entry.sentence, sort: "function", insert: `${entry.name}(\${})`,
  }));
  const callables = catalogue.kinds.filter((kind) => kind.callable).map((kind): Suggestion => ({ label: kind.name, detail: "({…})", help: kind.sentence, sort: "function", insert: `${kind.name}({\${}})` }));
  return { from: position - word.length, list: [...values, ...names, ...functions, ...callables] };
}

/** The listed values that an option takes, also inside lists and alternatives. */
function choices(type: OptionType): readonly (string | number | boolean)[] {
  if (type === "boolean") return [true, false];
  if (typeof type === "string") return [];
  if ("oneOf" in type) return type.oneOf;
  if ("anyOf" in type) return type.anyOf.flatMap(choices);
  return choices(type.listOf);
}

function insideText(expression: string): boolean {
  const line = expression.slice(expression.lastIndexOf("\n") + 1);
  const bare = line.replace(/"(?:[^"\\]|\\.)*"|'(?:[^'\\]|\\.)*'/g, "");
  return /["']/.test(bare) || /\/\//.test(bare);
}
