// The expression language: which ECMAScript expressions it takes, and which names one reads.

import { childrenOf, expressionTree } from "./acorn.ts";
import type { AnyNode, Expression, Pattern } from "./acorn.ts";

/** A fault in an expression; places are in its source. */
export interface ExpressionFault { readonly code: string; readonly message: string; readonly from: number; readonly to: number }

export interface ParsedExpression {
  readonly source: string;
  /** null where it does not parse or leaves the subset; then `faults` says why. */
  readonly tree: Expression | null;
  readonly faults: readonly ExpressionFault[];
  /** Names it reads and does not bind itself, each once, in order of first use. */
  readonly reads: readonly string[];
}

/** Parses one expression and checks it against the subset: literals, templates, arrays, objects, spread, names, members, calls,
 *  arithmetic, comparison, logic, conditional, arrow functions with an expression body. Never throws. */
export function parseExpression(source: string): ParsedExpression {
  if (source.trim() === "") return failed(source, { code: "empty", message: "There is no expression here: write a value", from: 0, to: source.length });
  const date = unquotedDate(source);
  const parsed = expressionTree(source);
  if (date !== null) return failed(source, date);
  if ("fault" in parsed) {
    const comma = strayComma(source);
    if (comma !== null) return failed(source, { code: "syntax", message: "A comma is left over after the value: take it away, for an option ends with its line", from: comma, to: comma + 1 });
    const at = Math.min(parsed.fault.at, source.length);
    return failed(source, { code: "syntax", message: syntaxWords(parsed.fault.message, source, at), from: at, to: Math.min(source.length, at + 1) });
  }
  const faults: ExpressionFault[] = [];
  const reads = new Map<string, number>();
  check(parsed.tree, { bound: [], reads, faults });
  return { source, tree: faults.length === 0 ? parsed.tree : null, faults, reads: [...reads.keys()] };
}

/** The value of an expression that is nothing but a number, text, truth or null; undefined for anything else. */
export function literalOf(source: string): number | string | boolean | null | undefined {
  const parsed = parseExpression(source);
  if (parsed.tree === null) return undefined;
  let tree = parsed.tree;
  while (tree.type === "ParenthesizedExpression") tree = tree.expression;
  if (tree.type === "Literal" && (tree.value === null || ["number", "string", "boolean"].includes(typeof tree.value))) return tree.value as number | string | boolean | null;
  if (tree.type === "UnaryExpression" && tree.operator === "-" && tree.argument.type === "Literal" && typeof tree.argument.value === "number") return -tree.argument.value;
  if (tree.type === "TemplateLiteral" && tree.expressions.length === 0) return tree.quasis[0].value.cooked ?? undefined;
  return undefined;
}

interface Checking { readonly bound: readonly string[]; readonly reads: Map<string, number>; readonly faults: ExpressionFault[] }

function check(node: AnyNode, at: Checking): void {
  switch (node.type) {
    case "Literal":
      if ("regex" in node && node.regex) return refuse(at, node, "regular expressions are not part of the language: use `includes`, `startsWith` or `split`");
      if ("bigint" in node && node.bigint) return refuse(at, node, "write the number without the `n`");
      return;
    case "Identifier": return read(node.name, node, at);
    case "TemplateLiteral": return node.expressions.forEach((each) => check(each, at));
    case "ArrayExpression":
      for (const each of node.elements) {
        if (each === null) refuse(at, node, "a list has an empty place: write `NaN` for missing data, `null` for not given");
        else check(each, at);
      }
      return;
    case "ObjectExpression":
      for (const each of node.properties) {
        if (each.type === "SpreadElement") { check(each.argument, at); continue; }
        if (each.kind !== "init" || each.method) { refuse(at, each, "write `name: value`; methods, getters and setters are not part of the language"); continue; }
        if (each.computed) check(each.key, at);
        else if (keyName(each.key) === "__proto__") refuse(at, each.key, "`__proto__` cannot be a key");
        check(each.value, at);
      }
      return;
    case "SpreadElement": return check(node.argument, at);
    case "MemberExpression":
      if (node.object.type === "Super" || node.property.type === "PrivateIdentifier") return refuse(at, node, "this is not part of the expression language");
      check(node.object, at);
      if (node.computed) check(node.property, at);
      return;
    case "ChainExpression": return check(node.expression, at);
    case "ParenthesizedExpression": return check(node.expression, at);
    case "CallExpression":
      if (node.callee.type === "Super") return refuse(at, node, "`super` is not part of the expression language");
      check(node.callee, at);
      return node.arguments.forEach((each) => check(each, at));
    case "UnaryExpression":
      if (!["-", "+", "!"].includes(node.operator)) return refuse(at, node, `\`${node.operator}\` is not part of the expression language`);
      return check(node.argument, at);
    case "BinaryExpression":
      if (node.left.type === "PrivateIdentifier") return refuse(at, node, "this is not part of the expression language");
      if (!BINARY.has(node.operator)) return refuse(at, node, operatorHint(node.operator));
      check(node.left, at);
      return check(node.right, at);
    case "LogicalExpression": check(node.left, at); return check(node.right, at);
    case "ConditionalExpression": check(node.test, at); check(node.consequent, at); return check(node.alternate, at);
    case "ArrowFunctionExpression": {
      if (node.async) return refuse(at, node, "`async` is not part of the expression language");
      if (node.body.type === "BlockStatement") return refuse(at, node.body, "a function's body is one expression here: write `x => x + 1`, without braces and `return`");
      const bound: string[] = [];
      for (const parameter of node.params) bind(parameter, bound, { ...at, bound: [...at.bound, ...bound] });
      return check(node.body, { ...at, bound: [...at.bound, ...bound] });
    }
    default: return refuse(at, node, nodeHint(node));
  }
}

/** Collects the names that a parameter binds; defaults are checked as expressions. */
function bind(pattern: Pattern, bound: string[], at: Checking): void {
  switch (pattern.type) {
    case "Identifier": bound.push(pattern.name); return;
    case "RestElement": return bind(pattern.argument, bound, at);
    case "AssignmentPattern": check(pattern.right, { ...at, bound: [...at.bound, ...bound] }); return bind(pattern.left, bound, at);
    case "ArrayPattern": for (const each of pattern.elements) if (each !== null) bind(each, bound, at); return;
    case "ObjectPattern":
      for (const each of pattern.properties) {
        if (each.type === "RestElement") { bind(each.argument, bound, at); continue; }
        if (each.computed) check(each.key, at);
        bind(each.value, bound, at);
      }
      return;
    default: refuse(at, pattern, "write a parameter's name here");
  }
}

function read(name: string, node: AnyNode, at: Checking): void {
  if (at.bound.includes(name)) return;
  if (name === "undefined") return refuse(at, node, "write `null` for \"not given\", `NaN` for missing data");
  if (!at.reads.has(name)) at.reads.set(name, node.start);
}

/** Where a name is first read, for a message about it; null when it is not. */
export function placeOfName(tree: Expression, name: string): { readonly from: number; readonly to: number } | null {
  let found: { from: number; to: number } | null = null;
  const look = (node: AnyNode): void => {
    if (found !== null) return;
    if (node.type === "Identifier" && node.name === name) { found = { from: node.start, to: node.end }; return; }
    if (node.type === "MemberExpression") { look(node.object as AnyNode); if (node.computed) look(node.property as AnyNode); return; }
    if (node.type === "Property" && !node.computed) { look(node.value as AnyNode); return; }
    for (const child of childrenOf(node)) look(child);
  };
  look(tree);
  return found;
}

/** Place of a comma that only ends the source, as it would end an item of a list; null where there is none, or more is wrong. */
function strayComma(source: string): number | null {
  const at = source.trimEnd().length - 1;
  return source[at] === "," && "tree" in expressionTree(source.slice(0, at)) ? at : null;
}

const BINARY = new Set(["+", "-", "*", "/", "%", "**", "===", "!==", "==", "!=", "<", "<=", ">", ">="]);

function operatorHint(operator: string): string {
  if (operator === "^") return "`^` is not a power here: write `**`";
  if (operator === "&" || operator === "|") return `write \`${operator}${operator}\` for logic`;
  if (operator === "in") return "`in` is not part of the language: read the property with `?.` and compare with `null`";
  return `\`${operator}\` is not part of the expression language`;
}

function nodeHint(node: AnyNode): string {
  switch (node.type) {
    case "AssignmentExpression": return "`=` would change something, and an expression only gives a value: write `==` to compare";
    case "UpdateExpression": return "`++` and `--` would change something, and an expression only gives a value";
    case "SequenceExpression": return "one value is expected here, not several with commas: use a list `[…]`";
    case "FunctionExpression": return "write an arrow function, `x => …`";
    case "NewExpression": return "`new` is not part of the expression language";
    case "ThisExpression": return "`this` is not part of the expression language";
    case "ImportExpression": return "`import` is not part of the expression language";
    case "TaggedTemplateExpression": return "a template cannot be called: write `name(…)`";
    case "ClassExpression": return "`class` is not part of the expression language";
    case "AwaitExpression": return "`await` is not needed: a cell waits for what it reads";
    case "MetaProperty": return "this is not part of the expression language";
    default: return "this is not part of the expression language";
  }
}

function refuse(at: Checking, node: AnyNode, message: string): void {
  at.faults.push({ code: "not-allowed", message: message[0] === "`" ? message : message[0].toUpperCase() + message.slice(1), from: node.start, to: node.end });
}

function keyName(key: AnyNode): string {
  return key.type === "Identifier" ? key.name : key.type === "Literal" ? String(key.value) : "";
}

function failed(source: string, fault: ExpressionFault): ParsedExpression {
  return { source, tree: null, faults: [fault], reads: [] };
}

/** A date without quotes: 2019-03 would be a subtraction. A leading zero, a week, a quarter, a time of day, three parts, or nothing else beside it tell. */
function unquotedDate(source: string): ExpressionFault | null {
  if (!/\d{4}-[\dQWqw]/.test(source)) return null;
  const bare = source.replace(/"(?:[^"\\\n]|\\.)*"|'(?:[^'\\\n]|\\.)*'|`(?:[^`\\]|\\.)*`|\/\/[^\n]*|\/\*[\s\S]*?\*\//g, (text) => " ".repeat(text.length));
  const dates = /(?<![\w$.-])\d{4}-(?:\d{2}-\d{2}(?:T[\d:.]+Z?)?|0\d|[Qq][1-4]|[Ww]\d{1,2}(?:-\d)?|\d{2}(?=T)[T\d:.]+Z?)(?![\w$])/g;
  const match = dates.exec(bare) ?? /^\s*(?:1[5-9]|20|21)\d{2}-(?:0[1-9]|1[0-2])\s*$/.exec(bare);
  if (match === null) return null;
  const lead = match[0].length - match[0].trimStart().length;
  const date = match[0].trim();
  return { code: "unquoted-date", message: `Quote the date: write "${date}"`, from: match.index + lead, to: match.index + lead + date.length };
}

/** The parser's message in the words of this language. */
function syntaxWords(message: string, source: string, at: number): string {
  if (message.startsWith("`")) return message;
  if (/Unterminated string/.test(message)) return "A text that opens here is not closed on its line: add the closing quote";
  if (/Unterminated template/.test(message)) return "A template that opens here is not closed: add the closing back quote";
  if (/Unterminated comment/.test(message)) return "A comment that opens here is not closed: add `*/`";
  if (/Unexpected token/.test(message)) {
    if (at >= source.trimEnd().length) return "The expression stops too early: something is missing at its end";
    return `\`${/^[\p{ID_Continue}$]+/u.exec(source.slice(at, at + 40))?.[0] ?? source.slice(at, at + 1)}\` is not expected here`;
  }
  if (/Identifier directly after number/.test(message)) return "A number runs into a name here: put an operator between them, or quotes around a text";
  return `The expression cannot be read: ${message[0].toLowerCase()}${message.slice(1)}`;
}
