// Splits a cell's body into its options: `name: expression`, or `"claim": condition`, each starting at column 0.

import { eachToken, skipBlank } from "./acorn.ts";
import type { Token } from "./acorn.ts";

/** Places are in the body. */
export interface BodyOption {
  readonly from: number; readonly to: number;
  readonly name: string; readonly nameFrom: number; readonly nameTo: number;
  /** The expression without blanks and comments around it; empty where there is none. */
  readonly expressionFrom: number; readonly expressionTo: number;
}
export interface BodyFault { readonly code: string; readonly message: string; readonly from: number; readonly to: number }
export interface SplitBody { readonly options: readonly BodyOption[]; readonly faults: readonly BodyFault[] }

/** @param body    the lines between the fences
 *  @param indent  columns by which the fence itself is indented (0 to 3); as many are taken off every line
 *  @param claims  names are quoted texts
 *  Cost O(length). Never throws. */
export function splitOptions(body: string, indent = 0, claims = false): SplitBody {
  const options: BodyOption[] = [];
  const faults: BodyFault[] = [];
  let at = skipBlank(body, 0);
  while (at < body.length) {
    const end = readOption(body, at, indent, claims, options, faults);
    at = skipBlank(body, Math.max(end, at + 1));
  }
  return { options, faults };
}

/** Reads the option at `start`; gives the place where the next one may start. */
function readOption(body: string, start: number, indent: number, claims: boolean, options: BodyOption[], faults: BodyFault[]): number {
  const head = match(NAME, body, start) ?? match(QUOTED, body, start);
  const colon = head === null ? -1 : skipBlank(body, start + head.length);
  if (head === null || body[colon] !== ":" || !atColumnZero(body, start, indent)) {
    const end = nextHead(body, start, indent, claims);
    faults.push(notAnOption(body, start, end, indent, claims));
    return end;
  }
  const quoted = /^["']/.test(head);
  if (claims && !quoted) faults.push({ code: "claim-unquoted", message: "A claim stands in quotes: `\"claim in words\": condition`", from: start, to: start + head.length });
  const { end, last } = endOfExpression(body, colon + 1, indent, claims, faults);
  const expressionFrom = Math.min(skipBlank(body, colon + 1), last);
  options.push({
    from: start, to: last, name: quoted ? unquote(head) : head, nameFrom: start, nameTo: start + head.length,
    expressionFrom: Math.max(expressionFrom, colon + 1), expressionTo: last,
  });
  return end;
}

/** Where the expression that begins after a colon ends: before the next token in column 0 outside brackets; `last` is the end of its last token.
 *  Where the tokens cannot be followed, at the next line that looks like an option, so that one slip costs one option. */
function endOfExpression(body: string, start: number, indent: number, claims: boolean, faults: BodyFault[]): { readonly end: number; readonly last: number } {
  const open: Token[] = [];
  let end = body.length;
  let last = start;
  const fault = eachToken(body, start, (token) => {
    if (open.length === 0 && atColumnZero(body, token.start, indent)) { end = token.start; return true; }
    last = token.end;
    if (token.kind === "open") open.push(token);
    else if (token.kind === "close") open.pop();
    return false;
  });
  if (fault === null && open.length === 0) return { end, last };
  if (fault === null) faults.push({ code: "unclosed", message: `\`${open[0].bracket}\` is opened here and not closed`, from: open[0].start, to: open[0].end });
  end = nextHead(body, start, indent, claims);
  return { end, last: start + body.slice(start, end).trimEnd().length };
}

/** Start of the next line that looks like an option's head, after the line of `start`. */
function nextHead(body: string, start: number, indent: number, claims: boolean): number {
  const head = new RegExp(`^ {0,${indent}}${claims ? "[\"'`]" : "(?:[\\p{ID_Start}$_][\\p{ID_Continue}$]*|\"[^\"\\n]*\"|'[^'\\n]*')\\s*:"}`, "gmu");
  const line = body.indexOf("\n", start);
  if (line < 0) return body.length;
  head.lastIndex = line + 1;
  const match = head.exec(body);
  return match === null ? body.length : match.index;
}

/** Cost O(indent): a long line has many tokens, each asked this. */
function atColumnZero(body: string, at: number, indent: number): boolean {
  let line = at;
  while (at - line < indent && /[^\S\n\r]/.test(body[line - 1] ?? "")) line -= 1;
  return line === 0 || body[line - 1] === "\n" || body[line - 1] === "\r";
}

function notAnOption(body: string, start: number, end: number, indent: number, claims: boolean): BodyFault {
  const line = body.slice(start, end).split(/\r?\n/)[0].trimEnd();
  const wants = claims ? "`\"claim in words\": condition`" : "`option: expression`";
  const hint = !atColumnZero(body, start, indent) ? ": an option starts at the beginning of its line"
    : /^[\p{ID_Start}$_][\p{ID_Continue}$]*\s*=[^=>]/u.test(line) ? ": write `:` for `=`" : "";
  return { code: "not-an-option", message: `\`${shorten(line)}\` is not of the form ${wants}${hint}`, from: start, to: start + line.length };
}

const NAME = /[\p{ID_Start}$_][\p{ID_Continue}$\u200c\u200d]*/uy;
const QUOTED = /"(?:[^"\\\n]|\\.)*"|'(?:[^'\\\n]|\\.)*'/y;

function match(pattern: RegExp, text: string, at: number): string | null {
  pattern.lastIndex = at;
  return pattern.exec(text)?.[0] ?? null;
}

function unquote(text: string): string {
  return text.slice(1, -1).replace(/\\(u\{([\da-fA-F]+)\}|u([\da-fA-F]{4})|n|t|.)/gs, (_, all: string, braces: string | undefined, four: string | undefined) => {
    const code = braces ?? four;
    return code !== undefined ? String.fromCodePoint(parseInt(code, 16)) : all === "n" ? "\n" : all === "t" ? "\t" : all;
  });
}

function shorten(text: string): string {
  return text.length > 40 ? `${text.slice(0, 40)}…` : text;
}
