// What expressions may do with values: own data properties only, arithmetic on numbers or two texts, faults that say what to use.

import { nearest } from "../text/nearest.ts";

/** A fault in an expression, for its author; `place` is in the expression's source, null until it is known. */
export class EvaluationError extends Error {
  readonly place: { readonly from: number; readonly to: number } | null;
  constructor(message: string, place: { readonly from: number; readonly to: number } | null = null, cause?: unknown) {
    super(message, { cause });
    this.name = "EvaluationError";
    this.place = place;
  }
}

/** Not a fault: what goes through an evaluation unchanged. */
class Signal extends Error {}
/** A claim cannot be decided. */
export class Undecided extends Signal { override readonly name = "Undecided" }
/** A claim hangs on missing data; `place` is in the expression's source, for whoever knows it to say what is missing. */
export class Missing extends Undecided {
  readonly place: { readonly from: number; readonly to: number };
  constructor(place: { readonly from: number; readonly to: number }) { super("a value is missing (NaN)"); this.place = place; }
}
/** A called kind answers later: evaluate again when it has. */
export class Pending extends Signal {
  override readonly name = "Pending";
  readonly answer: Promise<void>;
  constructor(answer: Promise<void>) { super("pending"); this.answer = answer; }
}
/** Newer work has overtaken this. */
export class Overtaken extends Signal { override readonly name = "Overtaken" }

export function isSignal(error: unknown): error is Signal {
  return error instanceof Signal;
}

type TypedArray = Float64Array | Float32Array | Int32Array | Uint8Array;

function isTyped(value: unknown): value is TypedArray {
  return ArrayBuffer.isView(value) && !(value instanceof DataView);
}

export function isList(value: unknown): value is readonly unknown[] | TypedArray {
  return Array.isArray(value) || isTyped(value);
}

/** Reads a property: an item or the length of a list or text, or an own data property of an object.
 *  @param lenient  after `?.`: what is not there gives undefined
 *  @throws EvaluationError */
export function property(holder: unknown, key: unknown, lenient = false): unknown {
  if (typeof key !== "string" && typeof key !== "number") throw new EvaluationError(`A property is named by a text or a number, not by ${whatIs(key)}`);
  if (holder === null || holder === undefined) throw new EvaluationError(`There is nothing to read \`${key}\` from: the value to its left is not given`);
  if (isList(holder) || typeof holder === "string") return itemOf(holder, key, lenient);
  if (typeof holder === "function") throw new EvaluationError(`A function has no property \`${key}\`${/^\w+$/.test(holder.name) ? `: call it, as in \`${holder.name}(…)\`` : ""}`);
  if (typeof holder !== "object") throw new EvaluationError(`${capital(whatIs(holder))} has no property \`${key}\``);
  const own = Object.getOwnPropertyDescriptor(holder, key);
  if (own !== undefined && "value" in own) return own.value;
  if (own !== undefined) throw new EvaluationError(`\`${key}\` is not plain data and cannot be read`);
  if (lenient) return undefined;
  throw new EvaluationError(absent(holder, String(key)));
}

function itemOf(holder: readonly unknown[] | TypedArray | string, key: string | number, lenient: boolean): unknown {
  if (key === "length") return holder.length;
  const index = typeof key === "number" ? key : /^\d+$/.test(key) ? Number(key) : null;
  const what = typeof holder === "string" ? "text" : "list";
  if (index === null) {
    if (lenient) return undefined;
    throw new EvaluationError(`A ${what} has no property \`${key}\`: it has \`length\`, items such as \`[0]\`, and methods such as \`${what === "list" ? "map(…)" : "includes(…)"}\``);
  }
  if (Number.isInteger(index) && index >= 0 && index < holder.length) return holder[index];
  if (lenient) return undefined;
  throw new EvaluationError(holder.length === 0 ? `The ${what} is empty, so there is no item [${index}]` : `There is no item [${index}]: the ${what} has ${holder.length}, counted from [0] to [${holder.length - 1}]${index < 0 ? `; from the end, use \`.at(${index})\`` : ""}`);
}

function absent(holder: object, key: string): string {
  const names = Object.keys(holder);
  if (isSeries(holder) && /^(?:map|filter|some|every|find|slice|reduce|length|at|includes|indexOf)$/.test(key)) return `A series has no \`${key}\`: use that of its values, \`.values.${key}\``;
  const near = nearest(key, names);
  if (near !== null) return `There is no \`${key}\` here: did you mean \`${near}\`?`;
  if (names.length === 0) return `There is no \`${key}\` here: the object is empty`;
  return `There is no \`${key}\` here: there ${names.length === 1 ? "is" : "are"} ${names.slice(0, 12).map((name) => `\`${name}\``).join(", ")}${names.length > 12 ? ", …" : ""}`;
}

/** Texts made by an expression stay below this length. */
const LONGEST_TEXT = 1_000_000;

/** A text of this length may be made. @throws EvaluationError */
export function textLength(length: number): void {
  if (length > LONGEST_TEXT) throw new EvaluationError(`This would make a text of ${length} letters; at most ${LONGEST_TEXT} are made`);
}

/** Arithmetic on two numbers; `+` joins two texts. @throws EvaluationError */
export function arithmetic(operator: string, a: unknown, b: unknown): number | string {
  if (typeof a === "number" && typeof b === "number") {
    switch (operator) {
      case "+": return a + b;
      case "-": return a - b;
      case "*": return a * b;
      case "/": return a / b;
      case "%": return a % b;
      case "**": return a ** b;
      default: throw new EvaluationError(`\`${operator}\` is not part of the expression language`);
    }
  }
  if (operator === "+" && typeof a === "string" && typeof b === "string") { textLength(a.length + b.length); return a + b; }
  throw new EvaluationError(`\`${operator}\` works on two numbers${operator === "+" ? " or two texts" : ""}; here is ${whatIs(typeof a === "number" ? b : a)}${instead(typeof a === "number" ? b : a, operator)}`);
}

/** Order of two numbers or two texts. @throws EvaluationError */
export function compare(operator: "<" | "<=" | ">" | ">=", a: unknown, b: unknown): boolean {
  if ((typeof a === "number" && typeof b === "number") || (typeof a === "string" && typeof b === "string")) {
    switch (operator) {
      case "<": return a < b;
      case "<=": return a <= b;
      case ">": return a > b;
      case ">=": return a >= b;
    }
  }
  const odd = typeof a === "number" ? b : a;
  if ((typeof a === "number" && typeof b === "string") || (typeof a === "string" && typeof b === "number")) throw new EvaluationError(`\`${operator}\` compares two numbers or two texts; here is a number and a text`);
  throw new EvaluationError(`\`${operator}\` compares two numbers or two texts; here is ${whatIs(odd)}${instead(odd, operator)}`);
}

function instead(value: unknown, operator: string): string {
  if (isSeries(value)) {
    if (/^[<>]/.test(operator)) return ": compare one of its numbers, such as `last(series)`";
    return `: for a series use \`combine(a, b, (x, y) => x ${operator} y)\`, or one of its numbers, such as \`last(series)\``;
  }
  if (isList(value)) return `: for a list use \`list.map(x => x ${operator} 2)\`, or one of its items, such as \`list[0]\``;
  if (typeof value === "object" && value !== null) {
    const number = Object.entries(value).find(([, each]) => typeof each === "number");
    return number === undefined ? "" : `: use one of its numbers, such as \`.${number[0]}\``;
  }
  if (typeof value === "function") return `: call it, as in \`${value.name === "" ? "f" : value.name}(…)\``;
  if (typeof value === "string" && value.trim() !== "" && Number.isFinite(Number(value))) return ": write the number without quotes";
  return "";
}

/** Items of a list, or the letters of a text, added to a list. @throws EvaluationError */
export function spreadInto(list: unknown[], value: unknown): void {
  if (!isList(value) && typeof value !== "string") throw new EvaluationError(`\`...\` takes a list; here is ${whatIs(value)}${isSeries(value) ? ": use its `.values`" : ""}`);
  for (const each of value) list.push(each);
}

/** Own data properties copied into an object; nothing given adds nothing. @throws EvaluationError */
export function spreadObject(made: Record<string, unknown>, value: unknown): void {
  if (value === null || value === undefined) return;
  if (typeof value !== "object" || isList(value)) throw new EvaluationError(`\`...\` inside an object takes an object; here is ${whatIs(value)}`);
  for (const key of Object.keys(value)) {
    if (key === "__proto__") throw new EvaluationError("`__proto__` cannot be a key");
    made[key] = property(value, key);
  }
}

/** A value inside a template. @throws EvaluationError */
export function textOf(value: unknown): string {
  if (typeof value === "string" || typeof value === "number" || typeof value === "boolean") return String(value);
  throw new EvaluationError(`A template takes texts, numbers and truths; here is ${whatIs(value)}${instead(value, "+").replace(/^: for a .*, or/, ": use")}`);
}

export function isSeries(value: unknown): value is { readonly n: number } {
  return typeof value === "object" && value !== null && "values" in value && "times" in value && "n" in value && isList(value.values);
}

/** A value in a few words. */
export function whatIs(value: unknown): string {
  if (value === null || value === undefined) return "a value that is not given";
  if (typeof value === "number") return Number.isNaN(value) ? "NaN (missing)" : `the number ${value}`;
  if (typeof value === "string") return `the text ${JSON.stringify(value.length > 30 ? `${value.slice(0, 30)}…` : value)}`;
  if (typeof value === "boolean") return `the truth ${value}`;
  if (typeof value === "function") return "a function";
  if (isList(value)) return `a list of ${value.length}`;
  if (isSeries(value)) return "a series";
  if (typeof value === "object" && "phi" in value && "sigma2" in value) return "a fit";
  return "an object";
}

function capital(text: string): string {
  return text[0].toUpperCase() + text.slice(1);
}
