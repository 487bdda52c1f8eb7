// The door to the ECMAScript parser: expressions, modules and tokens, with places counted from the start of the source given.

import { parse, parseExpressionAt, tokenizer, tokTypes } from "acorn";
import type { AnyNode, Expression, Node, Program, TokenType } from "acorn";

export type { AnyNode, Expression, Node, Pattern, Program, Property, SpreadElement, ArrowFunctionExpression, MemberExpression, CallExpression, TemplateLiteral, ObjectExpression } from "acorn";

export interface SyntaxFault { readonly message: string; readonly at: number }

const VERSION = 2022;

/** The tree of one whole expression, or what is wrong with it. Places are in `source`. */
export function expressionTree(source: string): { readonly tree: Expression } | { readonly fault: SyntaxFault } {
  try {
    const tree = parseExpressionAt(source, 0, { ecmaVersion: VERSION, sourceType: "script", preserveParens: true });
    const deep = tooDeep(tree, DEEPEST_EXPRESSION);
    if (deep !== null) return { fault: deep };
    const rest = restAfter(source, tree.end);
    return rest === null ? { tree } : { fault: { message: rest.message, at: rest.at } };
  } catch (error) {
    return { fault: faultOf(error) };
  }
}

/** The tree of a module's source, or what is wrong with it. */
export function moduleTree(source: string): { readonly tree: Program } | { readonly fault: SyntaxFault } {
  try {
    const tree = parse(source, { ecmaVersion: VERSION, sourceType: "module", allowAwaitOutsideFunction: true });
    const deep = tooDeep(tree, DEEPEST_MODULE);
    return deep === null ? { tree } : { fault: deep };
  } catch (error) {
    return { fault: faultOf(error) };
  }
}

/** Levels that an expression, and a script, may nest: whoever walks a tree does so by calling itself, and a chain of members or
 *  sums nests without a bracket, so that the parser itself never runs out of room. Far beyond what anybody writes. */
const TOO_DEEP = "this nests too deeply to be read: name a part of it in a cell of its own";
const DEEPEST_EXPRESSION = 500, DEEPEST_MODULE = 1500;

function tooDeep(tree: Node, deepest: number): SyntaxFault | null {
  let level = [tree];
  for (let depth = 0; level.length > 0; depth++) {
    if (depth > deepest) return { message: TOO_DEEP, at: level[0].start };
    level = level.flatMap(childrenOf);
  }
  return null;
}

/** What a token does to the depth of brackets, and where it stands. */
export interface Token { readonly start: number; readonly end: number; readonly kind: "open" | "close" | "colon" | "name" | "text" | "number" | "other"; readonly bracket: string }

/** Walks the tokens of `source` from `start`; `take` gives true to stop. Comments are passed over. Gives the fault that stopped it, if any. */
export function eachToken(source: string, start: number, take: (token: Token) => boolean): SyntaxFault | null {
  const rest = source.slice(start);
  try {
    const tokens = tokenizer(rest, { ecmaVersion: VERSION, sourceType: "script" });
    const templates: number[] = [];
    let depth = 0;
    for (;;) {
      const token = tokens.getToken();
      if (token.type === tokTypes.eof) return null;
      let kind = KINDS.get(token.type) ?? (token.type.keyword === undefined ? "other" : "name");
      if (token.type === tokTypes.backQuote) {
        // A back quote closes the template that was opened at this depth, else it opens one.
        kind = templates.at(-1) === depth - 1 ? "close" : "open";
        if (kind === "close") templates.pop(); else templates.push(depth);
      }
      if (kind === "open") depth += 1; else if (kind === "close") depth -= 1;
      if (take({ start: start + token.start, end: start + token.end, kind, bracket: rest.slice(token.start, token.end) })) return null;
    }
  } catch (error) {
    const fault = faultOf(error);
    return { message: fault.message, at: start + fault.at };
  }
}

const KINDS: ReadonlyMap<TokenType, Token["kind"]> = new Map<TokenType, Token["kind"]>([
  [tokTypes.parenL, "open"], [tokTypes.bracketL, "open"], [tokTypes.braceL, "open"], [tokTypes.dollarBraceL, "open"],
  [tokTypes.parenR, "close"], [tokTypes.bracketR, "close"], [tokTypes.braceR, "close"],
  [tokTypes.colon, "colon"], [tokTypes.string, "text"], [tokTypes.num, "number"], [tokTypes.name, "name"],
]);

/** End of the comments and white space that begin at `from`. */
export function skipBlank(source: string, from: number): number {
  const blank = /(?:\s|\/\/[^\n\r\u2028\u2029]*|\/\*[\s\S]*?\*\/)*/y;
  blank.lastIndex = from;
  blank.exec(source);
  return blank.lastIndex;
}

function restAfter(source: string, end: number): SyntaxFault | null {
  const at = skipBlank(source, end);
  if (at >= source.length) return null;
  return { message: `\`${source.slice(at, at + 12).split("\n")[0]}\` is left over after the end of the expression`, at };
}

/** The parser's own message without its place, which is given beside it. */
function faultOf(error: unknown): SyntaxFault {
  const at = typeof error === "object" && error !== null && "pos" in error && typeof error.pos === "number" ? error.pos : 0;
  // Brackets in brackets use up the parser's own stack.
  if (error instanceof RangeError || (error instanceof Error && error.message.includes("stack space"))) return { message: TOO_DEEP, at };
  const message = error instanceof Error ? error.message.replace(/ \(\d+:\d+\)$/, "") : String(error);
  return { message, at };
}

/** Children of a node, in the order of the source: every property that holds a node or a list of them. */
export function childrenOf(node: Node): AnyNode[] {
  const found: AnyNode[] = [];
  for (const value of Object.values(node)) {
    if (Array.isArray(value)) { for (const each of value) if (isNode(each)) found.push(each); }
    else if (isNode(value)) found.push(value);
  }
  return found;
}

function isNode(value: unknown): value is AnyNode {
  return typeof value === "object" && value !== null && "type" in value && typeof value.type === "string" && "start" in value;
}


