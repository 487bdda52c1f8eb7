// The methods that expressions may call: a listed set on lists, texts and numbers. None changes what it is called on.

import { nearest } from "../text/nearest.ts";
import { EvaluationError, isList, whatIs } from "./values.ts";

type Listed = (given: readonly unknown[]) => unknown;
type Call = (...given: readonly unknown[]) => unknown;

const LIST = new Set(["at", "concat", "every", "filter", "find", "findIndex", "findLast", "findLastIndex", "flat", "flatMap", "includes", "indexOf", "join", "lastIndexOf", "map", "reduce", "reduceRight", "slice", "some", "toReversed", "toSorted"]);
const TEXT = new Set(["at", "charAt", "concat", "endsWith", "includes", "indexOf", "lastIndexOf", "padEnd", "padStart", "repeat", "replace", "replaceAll", "slice", "split", "startsWith", "substring", "toLowerCase", "toUpperCase", "trim", "trimEnd", "trimStart"]);
const NUMBER = new Set(["toFixed", "toPrecision", "toExponential"]);
/** Methods that would change a list, and what to use. */
const INSTEAD: Readonly<Record<string, string>> = { sort: "toSorted", reverse: "toReversed", push: "concat", unshift: "concat", pop: "slice", shift: "slice", splice: "slice", forEach: "map" };
/** Texts made here stay below this length. */
const LONGEST = 1_000_000;

/** The method `key` of a value, ready to be called; null where it is no list, text or number, so that the property itself is looked up.
 *  @throws EvaluationError where the value is one and has no such method */
export function method(holder: unknown, key: unknown, callables: WeakSet<object>): Listed | null {
  if (isList(holder)) {
    const name = known(key, LIST, "list");
    // A typed array's own methods give typed arrays, which cannot hold texts or objects.
    const list = Array.isArray(holder) ? holder : Array.from(holder as ArrayLike<unknown>);
    return (given) => callList(list, name, given, callables);
  }
  if (typeof holder === "string") {
    const name = known(key, TEXT, "text");
    return (given) => callText(holder, name, given, callables);
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

function callList(list: readonly unknown[], name: string, given: readonly unknown[], callables: WeakSet<object>): unknown {
  if (["every", "filter", "find", "findIndex", "findLast", "findLastIndex", "flatMap", "map", "reduce", "reduceRight", "some"].includes(name)) functionOnly(given[0], name, callables);
  if (name === "toSorted") return sorted(list, given[0], callables);
  if (name === "toReversed") return [...list].reverse();
  if (name === "concat") return list.concat(...given.map((each) => (isList(each) && !Array.isArray(each) ? Array.from(each as ArrayLike<unknown>) : each)));
  if (name === "join" && list.some((each) => typeof each === "object" && each !== null)) throw new EvaluationError("`join` takes texts and numbers: map the items first");
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

function callText(text: string, name: string, given: readonly unknown[], callables: WeakSet<object>): unknown {
  for (const each of given) {
    if (typeof each === "function") functionOnly(each, name, callables);
    else if (typeof each === "object" && each !== null) throw new EvaluationError(`\`${name}\` takes texts and numbers; here is ${whatIs(each)}`);
  }
  const length = name === "repeat" ? text.length * Number(given[0]) : name.startsWith("pad") ? Number(given[0]) : 0;
  if (length > LONGEST) throw new EvaluationError(`\`${name}\` would make a text of ${length} letters; at most ${LONGEST} are made`);
  return (Reflect.get(String.prototype, name) as Call).call(text, ...given);
}

function functionOnly(value: unknown, name: string, callables: WeakSet<object>): void {
  if (typeof value !== "function" || !callables.has(value)) throw new EvaluationError(`\`${name}\` takes a function, such as \`x => x > 0\`; here is ${whatIs(value)}`);
}

function numberOnly(value: unknown, name: string): number {
  if (typeof value !== "number") throw new EvaluationError(`\`${name}\` takes a number; here is ${whatIs(value)}`);
  return value;
}
