// The expression language, interpreted: an ECMAScript tree compiled to closures. Nothing here makes code from text.

import type { AnyNode, ArrowFunctionExpression, Expression, MemberExpression, Pattern } from "../text/acorn.ts";
import { arithmetic, compare, EvaluationError, isSignal, Missing, property, spreadInto, spreadObject, textLength, textOf, whatIs } from "./values.ts";
import { Effort } from "./effort.ts";
import { method } from "./methods.ts";

/** What an evaluation may ask of its surroundings. */
export interface Surroundings {
  /** A name's value. @throws EvaluationError (places are filled in here), or a signal */
  lookup(name: string): unknown;
  /** Functions that may be called; arrow functions made by the evaluation are added to it. */
  readonly callables: WeakSet<object>;
  /** A claim is not decided by missing data: comparing NaN is then neither true nor false. */
  readonly claim?: boolean;
  /** Told the holder of a figure that is missing (NaN): it may say why. */
  missing?(holder: unknown): void;
}

export type Compiled = (around: Surroundings) => unknown;

/** Names bound by arrow functions: one frame a call. */
interface Frame { readonly around: Surroundings; readonly slots: unknown[]; readonly up: Frame | null; readonly effort: Effort }
type Code = (frame: Frame) => unknown;
/** Names in scope at a place, innermost last: where each stands at run time. */
type Scope = readonly (readonly string[])[];

/** Compiles an expression that `parseExpression` accepted. Cost O(size), once; the closures are then as quick as a call each.
 *  @throws EvaluationError (from the closures) with places in the expression's source */
export function compile(tree: Expression): Compiled {
  const code = codeOf(tree, []);
  return (around) => code({ around, slots: [], up: null, effort: new Effort() });
}

function codeOf(node: AnyNode, scope: Scope): Code {
  switch (node.type) {
    case "Literal": { const { value } = node; return () => value; }
    case "Identifier": return nameCode(node.name, node, scope);
    case "TemplateLiteral": return templateCode(node.quasis.map((each) => each.value.cooked ?? ""), node.expressions, scope);
    case "ArrayExpression": return listCode(node.elements as AnyNode[], scope);
    case "ObjectExpression": return objectCode(node.properties, scope);
    case "MemberExpression": { const member = memberCode(node, scope); return (frame) => chainEnd(member(frame)); }
    case "ChainExpression": { const chain = chainCode(node.expression as AnyNode, scope); return (frame) => chainEnd(chain(frame)); }
    case "ParenthesizedExpression": return codeOf(node.expression, scope);
    case "CallExpression": { const call = callCode(node, scope); return (frame) => chainEnd(call(frame)); }
    case "UnaryExpression": return unaryCode(node, scope);
    case "BinaryExpression": return binaryCode(node, scope);
    case "LogicalExpression": {
      const left = codeOf(node.left, scope), right = codeOf(node.right, scope);
      if (node.operator === "??") return (frame) => left(frame) ?? right(frame);
      const isAnd = node.operator === "&&";
      return (frame) => { const value = left(frame); return truth(value, node.left, frame) === isAnd ? right(frame) : value; };
    }
    case "ConditionalExpression": {
      const test = codeOf(node.test, scope), then = codeOf(node.consequent, scope), otherwise = codeOf(node.alternate, scope);
      return (frame) => (truth(test(frame), node.test, frame) ? then(frame) : otherwise(frame));
    }
    case "ArrowFunctionExpression": return arrowCode(node, scope);
    default: return () => { throw new EvaluationError("This is not part of the expression language", { from: node.start, to: node.end }); };
  }
}

function nameCode(name: string, node: AnyNode, scope: Scope): Code {
  for (let up = 0; up < scope.length; up += 1) {
    const slot = scope[scope.length - 1 - up].indexOf(name);
    if (slot < 0) continue;
    return (frame) => { let at = frame; for (let k = 0; k < up; k += 1) at = at.up ?? at; return at.slots[slot]; };
  }
  return (frame) => placed(node, () => frame.around.lookup(name));
}

function templateCode(texts: readonly string[], nodes: readonly Expression[], scope: Scope): Code {
  const codes = nodes.map((each) => codeOf(each, scope));
  return (frame) => codes.reduce((text, code, i) => placed(nodes[i], () => { const next = text + textOf(code(frame)) + texts[i + 1]; textLength(next.length); return next; }), texts[0]);
}

function listCode(nodes: readonly AnyNode[], scope: Scope): Code {
  const items = nodes.map((node) => ({ node, spread: node.type === "SpreadElement", code: codeOf(node.type === "SpreadElement" ? node.argument : node, scope) }));
  return (frame) => {
    const list: unknown[] = [];
    for (const { node, spread, code } of items) {
      if (spread) placed(node, () => spreadInto(list, frame.effort.list(code(frame))));
      else list.push(code(frame));
    }
    frame.effort.spend(items.length);
    return list;
  };
}

function objectCode(properties: readonly AnyNode[], scope: Scope): Code {
  const parts = properties.map((each) => {
    if (each.type === "SpreadElement") return { node: each, key: null, value: codeOf(each.argument, scope) };
    if (each.type !== "Property") throw new EvaluationError("This is not part of the expression language", { from: each.start, to: each.end });
    const name = each.key.type === "Identifier" ? each.key.name : each.key.type === "Literal" ? String(each.key.value) : "";
    return { node: each, key: each.computed ? codeOf(each.key, scope) : () => name, value: codeOf(each.value, scope) };
  });
  return (frame) => {
    const made: Record<string, unknown> = {};
    for (const { node, key, value } of parts) {
      placed(node, () => {
        frame.effort.spend(1);
        if (key === null) { const given = value(frame); spreadObject(made, given); frame.effort.spend(Object.keys(Object(given) as object).length); }
        else {
          const name = key(frame);
          if ((typeof name !== "string" && typeof name !== "number") || name === "__proto__") throw new EvaluationError(name === "__proto__" ? "`__proto__` cannot be a key" : "A key is a text or a number");
          made[name] = value(frame);
        }
      });
    }
    return made;
  };
}

/** Marks that a `?.` found nothing to its left: the rest of the chain is then left out. */
const NOTHING = Symbol("nothing");

function chainEnd(value: unknown): unknown {
  return value === NOTHING ? undefined : value;
}

/** A link of a chain, which may give NOTHING. */
function chainCode(node: AnyNode, scope: Scope): Code {
  if (node.type === "MemberExpression") return memberCode(node, scope);
  if (node.type === "CallExpression") return callCode(node, scope);
  return codeOf(node, scope);
}

function memberCode(node: MemberExpression, scope: Scope): Code {
  const object = chainCode(node.object as AnyNode, scope);
  const key = keyCode(node, scope);
  return (frame) => {
    const holder = object(frame);
    if (holder === NOTHING || (node.optional && (holder === null || holder === undefined))) return NOTHING;
    const value = placed(node, () => property(holder, key(frame), node.optional));
    if (Number.isNaN(value)) frame.around.missing?.(holder);
    return value;
  };
}

function keyCode(node: MemberExpression, scope: Scope): Code {
  if (node.computed) return codeOf(node.property as AnyNode, scope);
  const name = node.property.type === "Identifier" ? node.property.name : "";
  return () => name;
}

function callCode(node: Extract<AnyNode, { type: "CallExpression" }>, scope: Scope): Code {
  const given = listCode(node.arguments, scope);
  const callee = node.callee as AnyNode;
  if (callee.type === "MemberExpression") {
    const object = chainCode(callee.object as AnyNode, scope);
    const key = keyCode(callee, scope);
    return (frame) => {
      const holder = object(frame);
      if (holder === NOTHING || (callee.optional && (holder === null || holder === undefined))) return NOTHING;
      const name = key(frame);
      const listed = placed(callee, () => method(holder, name, frame.around.callables, frame.effort));
      if (listed !== null) { const list = given(frame) as unknown[]; return placed(node, () => listed(list)); }
      const callable = placed(callee, () => property(holder, name, node.optional));
      return node.optional && (callable === null || callable === undefined) ? NOTHING : call(callable, given(frame) as unknown[], node, frame);
    };
  }
  const code = chainCode(callee, scope);
  return (frame) => {
    const callable = code(frame);
    if (callable === NOTHING || (node.optional && (callable === null || callable === undefined))) return NOTHING;
    return call(callable, given(frame) as unknown[], node, frame);
  };
}

function call(callable: unknown, given: readonly unknown[], node: Extract<AnyNode, { type: "CallExpression" }>, frame: Frame): unknown {
  return placed(node, () => {
    if (typeof callable !== "function" || !frame.around.callables.has(callable)) {
      throw new EvaluationError(typeof callable === "function" ? "This function is not one that an expression may call" : `${calleeName(node)} is not a function, so it cannot be called`);
    }
    return frame.effort.list((callable as (...given: readonly unknown[]) => unknown)(...frame.effort.arguments(given)));
  });
}

function calleeName(node: Extract<AnyNode, { type: "CallExpression" }>): string {
  const callee = node.callee as AnyNode;
  if (callee.type === "Identifier") return `\`${callee.name}\``;
  if (callee.type === "MemberExpression" && callee.property.type === "Identifier" && !callee.computed) return `\`${callee.property.name}\``;
  return "This";
}

function unaryCode(node: Extract<AnyNode, { type: "UnaryExpression" }>, scope: Scope): Code {
  const code = codeOf(node.argument, scope);
  if (node.operator === "!") return (frame) => !truth(code(frame), node.argument, frame);
  const sign = node.operator === "-" ? -1 : 1;
  return (frame) => placed(node, () => arithmetic("*", sign, code(frame)));
}

function binaryCode(node: Extract<AnyNode, { type: "BinaryExpression" }>, scope: Scope): Code {
  const left = codeOf(node.left as AnyNode, scope), right = codeOf(node.right, scope);
  const { operator } = node;
  if (operator === "===" || operator === "!==" || operator === "==" || operator === "!=") {
    const sameType = operator.length === 2, equal = operator.startsWith("=");
    return (frame) => {
      const a = left(frame), b = right(frame);
      if (sameType) placed(node, () => comparable(operator, a, b));
      if (frame.up === null) { decides(a, node.left, frame); decides(b, node.right, frame); }
      return (a === b) === equal;
    };
  }
  if (operator === "<" || operator === "<=" || operator === ">" || operator === ">=") {
    return (frame) => {
      const a = left(frame), b = right(frame);
      if (typeof a === typeof b) { decides(a, node.left, frame); decides(b, node.right, frame); }
      return placed(node, () => compare(operator, a, b));
    };
  }
  return (frame) => { const a = left(frame), b = right(frame); return placed(node, () => arithmetic(operator, a, b)); };
}

/** ECMAScript's `==` would turn one type into the other without a word; here it takes two values of one type, or a value and `null`. */
function comparable(operator: string, a: unknown, b: unknown): void {
  if (a === null || b === null || typeof a === typeof b) return;
  throw new EvaluationError(`\`${operator}\` compares two values of one type; here are ${whatIs(a)} and ${whatIs(b)}`);
}

/** Missing data does not decide a claim. */
function decides(value: unknown, node: AnyNode, frame: Frame): void {
  if (frame.around.claim === true && Number.isNaN(value)) throw new Missing({ from: node.start, to: node.end });
}

/** ECMAScript's truth of a value. */
function truth(value: unknown, node: AnyNode, frame: Frame): boolean {
  decides(value, node, frame);
  if (typeof value === "object" && value !== null) throw new EvaluationError("A condition is true or false; this is an object or a list", { from: node.start, to: node.end });
  return Boolean(value);
}

function arrowCode(node: ArrowFunctionExpression, scope: Scope): Code {
  const names: string[] = [];
  const binders = node.params.map((each, i) => binder(each, names, scope, each.type === "RestElement" ? (given) => given.slice(i) : (given) => given[i]));
  const body = codeOf(node.body as AnyNode, [...scope, names]), place = { from: node.start, to: node.end };
  return (frame) => {
    const arrow = (...given: readonly unknown[]): unknown => {
      const { around, effort } = frame;
      effort.enter(place);
      try {
        const inner: Frame = { around, slots: [], up: frame, effort };
        for (const bind of binders) bind(inner, given);
        return body(inner);
      } finally {
        effort.leave();
      }
    };
    frame.around.callables.add(arrow);
    return arrow;
  };
}

type Binder = (frame: Frame, given: readonly unknown[]) => void;

/** Binds a parameter's names into the frame of a call. `take` gets the parameter's value out of what was given. */
function binder(pattern: Pattern, names: string[], scope: Scope, take: (given: readonly unknown[], frame: Frame) => unknown): Binder {
  switch (pattern.type) {
    case "Identifier": { const slot = names.push(pattern.name) - 1; return (frame, given) => { frame.slots[slot] = take(given, frame); }; }
    case "RestElement": return binder(pattern.argument, names, scope, take);
    case "AssignmentPattern": {
      const otherwise = codeOf(pattern.right, [...scope, names]);
      return binder(pattern.left, names, scope, (given, frame) => take(given, frame) ?? otherwise(frame));
    }
    case "ArrayPattern": return several(pattern.elements.flatMap((each, i) => (each === null ? [] : [binder(each, names, scope, (given, frame) => {
      const list: unknown[] = [];
      placed(pattern, () => spreadInto(list, take(given, frame)));
      return each.type === "RestElement" ? list.slice(i) : list[i];
    })])));
    case "ObjectPattern": return several(pattern.properties.map((each) => {
      if (each.type === "RestElement") throw new EvaluationError("Name the properties that you need instead of `...`", { from: each.start, to: each.end });
      const key = each.computed ? codeOf(each.key, [...scope, names]) : null;
      const name = each.key.type === "Identifier" ? each.key.name : each.key.type === "Literal" ? String(each.key.value) : "";
      return binder(each.value, names, scope, (given, frame) => placed(each, () => property(take(given, frame), key === null ? name : key(frame), each.value.type === "AssignmentPattern")));
    }));
    default: throw new EvaluationError("Write a parameter's name here", { from: pattern.start, to: pattern.end });
  }
}

function several(binders: readonly Binder[]): Binder {
  return (frame, given) => { for (const bind of binders) bind(frame, given); };
}

/** Runs `work`; a fault without a place gets this node's. Faults of called functions become faults of the expression. */
function placed<T>(node: AnyNode, work: () => T): T {
  try {
    return work();
  } catch (error) {
    if (isSignal(error)) throw error;
    if (error instanceof EvaluationError) throw error.place === null ? new EvaluationError(error.message, { from: node.start, to: node.end }, error.cause) : error;
    if (error instanceof RangeError && /call stack/i.test(error.message)) throw new EvaluationError("This nests too deeply to be computed", { from: node.start, to: node.end }, error);
    throw new EvaluationError(error instanceof Error ? error.message : String(error), { from: node.start, to: node.end }, error);
  }
}
