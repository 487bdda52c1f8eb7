// What one cell's body says, with places counted from the start of the body: so that an unchanged body need not be read again.

import type { Shape } from "./notebook.ts";
import { parseExpression, placeOfName } from "./expression.ts";
import { suggestion } from "./nearest.ts";
import { splitOptions } from "./options.ts";
import { parseScript } from "./script.ts";
import { perhapsText, unquotedText } from "./unquoted.ts";

export interface BodyProblem { readonly code: string; readonly message: string; readonly from: number; readonly to: number }
/** A name that is read, and where it first is; `quoted` is the text that it may have been meant as, should there be no such name. */
export interface NameRead { readonly name: string; readonly from: number; readonly to: number; readonly quoted?: string }
export interface BodyOptionText {
  readonly from: number; readonly to: number;
  readonly name: string; readonly nameFrom: number; readonly nameTo: number;
  readonly source: string; readonly expressionFrom: number; readonly expressionTo: number;
  readonly reads: readonly NameRead[];
}
export interface CellBody {
  readonly options: readonly BodyOptionText[];
  readonly exports: readonly string[];
  readonly reads: readonly NameRead[];
  readonly problems: readonly BodyProblem[];
}

/** Reads a body for a kind; `indent` is the fence's. Never throws. */
export function readBody(body: string, shape: Shape, indent: number): CellBody {
  if (shape.body === "code") {
    const script = parseScript(body);
    return { options: [], exports: script.exports, reads: script.reads.map((name) => ({ name, from: 0, to: 0 })), problems: script.faults };
  }
  const { options: split, faults } = splitOptions(body, indent, shape.body === "claims");
  const problems: BodyProblem[] = [...faults];
  const seen = new Set<string>();
  const options = split.map((each): BodyOptionText => {
    const source = body.slice(each.expressionFrom, each.expressionTo);
    const namePlace = { from: each.nameFrom, to: each.nameTo };
    if (seen.has(each.name)) problems.push({ code: "repeated-option", message: shape.body === "claims" ? "This claim is made twice: remove one" : `\`${each.name}\` is given twice: remove one`, ...namePlace });
    seen.add(each.name);
    if (shape.body === "options" && !Object.hasOwn(shape.options, each.name)) problems.push({ code: "unknown-option", message: unknownOption(shape, each.name), ...namePlace });
    return { ...each, source, reads: readOption(each.expressionFrom, source, shape, each.name, faults.some((fault) => fault.from >= each.from && fault.to <= each.to), namePlace, problems) };
  });
  for (const [name, option] of Object.entries(shape.options)) {
    if (option.required && !seen.has(name)) problems.push({ code: "missing-option", message: `\`${shape.name}\` needs the option \`${name}\`: add a line \`${name}: …\``, from: -1, to: -1 });
  }
  return { options, exports: [], reads: distinct(options.flatMap((each) => each.reads)), problems };
}

function readOption(at: number, source: string, shape: Shape, name: string, known: boolean, namePlace: { from: number; to: number }, problems: BodyProblem[]): NameRead[] {
  const parsed = parseExpression(source);
  const type = Object.hasOwn(shape.options, name) ? shape.options[name].type : undefined;
  const fault = parsed.faults.at(0);
  const text = fault === undefined || fault.code === "syntax" ? unquotedText(source, type, parsed.tree) : null;
  if (text !== null) {
    problems.push({ code: "unquoted-text", message: `\`${name}\` takes a text: put it in quotes, ${text}`, from: at, to: at + source.length });
    return [];
  }
  if (parsed.tree === null || fault !== undefined) {
    if (fault?.code === "empty") problems.push({ code: "empty-option", message: `\`${name}\` has no value: write one after the colon, or remove the line`, ...namePlace });
    // An unclosed bracket has been told already, where it opens.
    else if (!known || fault?.code !== "syntax") for (const each of parsed.faults) problems.push({ code: each.code, message: each.message, from: at + each.from, to: at + each.to });
    return [];
  }
  const tree = parsed.tree;
  if (shape.options[name]?.taken === "name" && Object.hasOwn(shape.options, name) && tree.type !== "Identifier" && !(tree.type === "Literal" && typeof tree.value === "string")) {
    problems.push({ code: "name-expected", message: `\`${name}\` takes the name of a cell`, from: at, to: at + source.length });
  }
  const taken = Object.hasOwn(shape.options, name) ? shape.options[name].taken ?? "value" : "value";
  const quoted = taken === "value" ? perhapsText(source, type, tree) : null;
  return parsed.reads.map((each) => {
    const place = placeOfName(tree, each) ?? { from: 0, to: source.length };
    return { name: each, from: at + place.from, to: at + place.to, ...(quoted === null ? {} : { quoted }) };
  });
}

function unknownOption(shape: Shape, name: string): string {
  const known = Object.keys(shape.options);
  const near = suggestion(name, known);
  return `\`${shape.name}\` has no option \`${name}\`${near !== "" ? near : known.length === 0 ? ": it takes none" : `; it takes ${known.map((each) => `\`${each}\``).join(", ")}`}`;
}

function distinct(reads: readonly NameRead[]): NameRead[] {
  const seen = new Set<string>();
  return reads.filter((each) => !seen.has(each.name) && (seen.add(each.name), true));
}
