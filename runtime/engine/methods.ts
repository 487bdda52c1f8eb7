// The methods that expressions may call: a listed set on lists, texts and numbers. None changes what it is called on.

import { nearest } from "../text/nearest.ts";
import type { Effort } from "./effort.ts";
import { EvaluationError, isList, textLength, whatIs } from "./values.ts";

type Listed = (given: readonly unknown[]) => unknown;
type Call = (...given: readonly unknown[]) => unknown;

const LIST = new Set(["at", "concat", "every", "filter", "find", "findIndex", "findLast", "findLastIndex", "flat", "flatMap", "includes", "indexOf", "join", "lastIndexOf", "map", "reduce", "reduceRight", "slice", "some", "toReversed", "toSorted"]);
const TEXT = new Set(["at", "charAt", "concat", "endsWith", "includes", "indexOf", "lastIndexOf", "padEnd", "padStart", "repeat", "replace", "replaceAll", "slice", "split", "startsWith", "substring", "toLowerCase", "toUpperCase", "trim", "trimEnd", "trimStart"]);
const SEEKING = new Set(["includes", "indexOf", "lastIndexOf", "replace", "replaceAll", "split"]);
const NUMBER = new Set(["toFixed", "toPrecision", "toExponential"]);
/** Methods that would change a list, and what to use. */
const INSTEAD: Readonly<Record<string, string>> = { sort: "toSorted", reverse: "toReversed", push: "concat", unshift: "concat", pop: "slice", shift: "slice", splice: "slice", forEach: "map" };

/** The method `key` of a value, ready to be called; null where it is no list, text or number, so that the property itself is looked up.
 *  @throws EvaluationError where the value is one and has no such method */
export function method(holder: unknown, key: unknown, callables: WeakSet<object>, effort: Effort): Listed | null {
  if (isList(holder)) {
    const name = known(key, LIST, "list");
    // A typed array's own methods give typed arrays, which cannot hold texts or objects.
    const list = Array.isArray(holder) ? holder : Array.from(holder as ArrayLike<unknown>);
    return (given) => callList(list, name, effort.arguments(given), { callables, effort });
  }
  if (typeof holder === "string") {
    const name = known(key, TEXT, "text");
    return (given) => callText(holder, name, given, { callables, effort });
  }
  if (typeof holder === "number") {
    const name = known(key, NUMBER, "number");
    return (given) => (holder[name as "toFixed"] as Call).call(holder, ...given.map((each) => numberOnly(each, name)));
  }
  return null;
}

function known(key: unknown, names: ReadonlySet<string>, what: string): string {
  if (typeof key === "string" && names.has(key)) return key;
  const other = typeof key === "string" && Object.hasOwn(INSTEAD, key) && what === "list" ? INSTEAD[key] : null;
  if (other !== null) throw new EvaluationError(`Lists are read-only here: use \`${other}\` for \`${String(key)}\``);
  const near = typeof key === "string" ? nearest(key, names) : null;
  throw new EvaluationError(`A ${what} has no method \`${String(key)}\`${near === null ? `; it has ${[...names].join(", ")}` : `: did you mean \`${near}\`?`}`);
}

interface Around { readonly callables: WeakSet<object>; readonly effort: Effort }

function callList(list: readonly unknown[], name: string, given: readonly unknown[], { callables, effort }: Around): unknown {
  effort.spend(list.length);
  if (["every", "filter", "find", "findIndex", "findLast", "findLastIndex", "flatMap", "map", "reduce", "reduceRight", "some"].includes(name)) functionOnly(given[0], name, callables);
  if (name === "toSorted") return sorted(list, given[0], callables);
  if (name === "toReversed") return [...list].reverse();
  if (name === "flatMap") return flat(list.map((item, i) => (given[0] as Call)(item, i, list)), 1, effort);
  if (name === "flat") return flat(list, given[0] === undefined ? 1 : Number(given[0]), effort);
  if (name === "concat") for (const each of given) effort.list(each);
  if (name === "concat") return list.concat(...given.map((each) => (isList(each) && !Array.isArray(each) ? Array.from(each as ArrayLike<unknown>) : each)));
  if (name === "join" && list.some((each) => typeof each === "object" && each !== null)) throw new EvaluationError("`join` takes texts and numbers: map the items first");
  if (name === "join") textLength(list.reduce((sum: number, each) => sum + String(each ?? "").length, 0) + Math.max(0, list.length - 1) * String(given[0] ?? ",").length);
  return (Reflect.get(Array.prototype, name) as Call).call(list, ...given);
}

/** Numbers by size, texts by alphabet: ECMAScript's own order of numbers is by their digits, which nobody wants. */
function sorted(list: readonly unknown[], order: unknown, callables: WeakSet<object>): unknown[] {
  if (order !== undefined) {
    functionOnly(order, "toSorted", callables);
    return [...list].sort(order as (a: unknown, b: unknown) => number);
  }
  if (list.every((each) => typeof each === "number")) return [...list].sort((a, b) => (Number.isNaN(a) ? 1 : Number.isNaN(b) ? -1 : (a as number) - (b as number)));
  if (list.every((each) => typeof each === "string")) return [...list].sort();
  throw new EvaluationError("`toSorted` needs a rule for items that are not all numbers or all texts: `list.toSorted((a, b) => a.x - b.x)`");
}

/** Lists inside a list, opened to a depth. Counted as it goes, for one list may stand in it many times. */
function flat(list: readonly unknown[], depth: number, effort: Effort, made: unknown[] = []): unknown[] {
  effort.spend(list.length);
  for (const each of list) { if (Array.isArray(each) && depth >= 1) flat(each as readonly unknown[], depth - 1, effort, made); else made.push(each); }
  return made;
}

function callText(text: string, name: string, given: readonly unknown[], { callables, effort }: Around): unknown {
  for (const each of given) {
    if (typeof each === "function") functionOnly(each, name, callables);
    else if (typeof each === "object" && each !== null) throw new EvaluationError(`\`${name}\` takes texts and numbers; here is ${whatIs(each)}`);
  }
  // A long text sought in a long text may take the product of their lengths.
  effort.spend(text.length * (1 + (SEEKING.has(name) ? String(given[0]).length / 100 : 0)));
  if (name === "replace" || name === "replaceAll") return replaced(text, name, given);
  textLength(name === "repeat" ? text.length * Number(given[0]) : name.startsWith("pad") ? Number(given[0]) : name === "concat" ? given.reduce((sum: number, each) => sum + String(each).length, text.length) : 0);
  return (Reflect.get(String.prototype, name) as Call).call(text, ...given);
}

function replaced(text: string, name: "replace" | "replaceAll", [sought, by]: readonly unknown[]): string {
  const before = String(sought), times = name === "replace" ? 1 : text.split(before).length;
  // `$` in a replacement may stand for any part of the text.
  if (typeof by !== "function") textLength(text.length + times * (String(by).length + (String(by).includes("$") ? text.length : 0)));
  let made = text.length;
  const put = typeof by === "function" ? (...found: readonly unknown[]) => { const next = String((by as Call)(...found)); made += next.length; textLength(made); return next; } : String(by);
  return typeof put === "string" ? text[name](before, put) : text[name](before, put);
}

function functionOnly(value: unknown, name: string, callables: WeakSet<object>): void {
  if (typeof value !== "function" || !callables.has(value)) throw new EvaluationError(`\`${name}\` takes a function, such as \`x => x > 0\`; here is ${whatIs(value)}`);
}

function numberOnly(value: unknown, name: string): number {
  if (typeof value !== "number") throw new EvaluationError(`\`${name}\` takes a number; here is ${whatIs(value)}`);
  return value;
}
