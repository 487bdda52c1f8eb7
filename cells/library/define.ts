// How a library function is described: its arguments, each with what it takes, from which signature and checking come.

import { isFit, isSeries, type Fit, type Forecaster, type Series } from "../../stdlib/index.ts";
import { describe } from "../check.ts";
import type { LibraryFunction } from "../kind.ts";

/** One argument. `read` gives the value as the function takes it, or null where it is not of the kind. */
export interface Param<T> {
  readonly name: string;
  /** What to give, in words, for messages. */
  readonly expected: string;
  readonly read: (value: unknown) => { readonly value: T } | null;
  /** What to do instead, where a common slip is recognised. */
  readonly slip?: (value: unknown) => string | null;
}

type Values<P extends readonly Param<unknown>[]> = { readonly [K in keyof P]: P[K] extends Param<infer T> ? T : never };

/** A function of a topic.
 *  @param name  as expressions write it, dotted where it belongs to a family ("rule.naive") */
export function define<const P extends readonly Param<unknown>[]>(topic: string, name: string, params: P, sentence: string, call: (...args: Values<P>) => unknown): LibraryFunction {
  const signature = `${name}(${params.map((p) => p.name).join(", ")})`;
  return {
    name, signature, sentence, topic,
    call: (...given) => {
      if (given.length > params.length) throw new RangeError(`${name}: ${given.length} arguments are given, and it takes ${params.length}: ${signature}`);
      const args = params.map((param, i) => argument(name, signature, param, given[i])) as unknown as Values<P>;
      return named(name, () => call(...args));
    },
  };
}

/** A refusal from the numbers names the function that the author called, not the one inside it that noticed. */
function named<T>(name: string, work: () => T): T {
  try {
    return work();
  } catch (error) {
    if (!(error instanceof RangeError) || /call stack/i.test(error.message)) throw error;
    throw new RangeError(`${name}: ${error.message.replace(/^[A-Za-z.]+(\([^)]*\))?: /, "")}`, { cause: error });
  }
}

function argument(name: string, signature: string, param: Param<unknown>, given: unknown): unknown {
  const read = param.read(given ?? undefined);
  if (read !== null) return read.value;
  const found = given === undefined || given === null ? "is not given" : `is ${describe(given)}`;
  throw new RangeError(`${name}: ${param.name} ${found}; ${param.slip?.(given) ?? `give ${param.expected}${hint(given)}, as in ${signature}`}`);
}

/** A common slip, recognised. */
function hint(given: unknown): string {
  if (isFit(given)) return " (a fit has its `.residuals` and its `.series`)";
  if (typeof given !== "object" || given === null || isSeries(given)) return "";
  const inside = Object.entries(given).find(([, item]) => isSeries(item));
  return inside === undefined ? "" : ` (here perhaps \`.${inside[0]}\`)`;
}

/** May be left out; null counts as left out. */
export function optional<T>(param: Param<T>): Param<T | undefined> {
  return { ...param, read: (value) => (value === undefined ? { value: undefined } : param.read(value)) };
}

/** An argument that passes a test as it is. */
export function param<T>(name: string, expected: string, passes: (value: unknown) => value is T): Param<T> {
  return { name, expected, read: (value) => (passes(value) ? { value } : null) };
}

/** A number that may be missing (NaN), or one within bounds. */
export function number(name: string, { min = -Infinity, max = Infinity, expected = "a number" } = {}): Param<number> {
  return param(name, expected, (v): v is number => typeof v === "number" && (Number.isNaN(v) ? min === -Infinity && max === Infinity : v >= min && v <= max));
}

/** A whole number from a least one on. */
export function whole(name: string, min = 0, max = Infinity): Param<number> {
  const range = min === -Infinity ? "" : max === Infinity ? `, ${min} or more` : ` from ${min} to ${max}`;
  return param(name, `a whole number${range}`, (v): v is number => typeof v === "number" && Number.isInteger(v) && v >= min && v <= max);
}

/** A probability or share strictly between 0 and 1. */
export function share(name: string): Param<number> {
  return param(name, "a number between 0 and 1, such as 0.95", (v): v is number => typeof v === "number" && v > 0 && v < 1);
}

/** One of some words. */
export function word<const W extends string>(name: string, words: readonly W[]): Param<W> {
  return param(name, words.map((w) => `"${w}"`).join(" or "), (v): v is W => words.includes(v as W));
}

export function text(name: string, expected = "a text in quotes"): Param<string> {
  return param(name, expected, (v): v is string => typeof v === "string");
}

/** A time; a number is refused, because dates are quoted. */
export function time(name: string): Param<string> {
  return { ...text(name, "a quoted time such as \"2019-03\""), slip: (value) => (typeof value === "number" ? `quote the date, as in "${value}"` : null) };
}

export function series(name = "series"): Param<Series> {
  return param(name, "a series, such as the name of a load or transform cell", isSeries);
}

/** A series, or a list of numbers. */
export function numbers(name: string): Param<Series | ArrayLike<number>> {
  return param(name, "a series or a list of numbers", isNumbers);
}

/** A number, a series or a list of numbers. */
export function figures(name: string): Param<Series | ArrayLike<number> | number> {
  return param(name, "a number, a series or a list of numbers", (v): v is Series | ArrayLike<number> | number => typeof v === "number" || isNumbers(v));
}

/** A series, a list of numbers or a fit, whose residuals are then meant. */
export function subject(name = "x"): Param<Series | ArrayLike<number> | Fit> {
  return param(name, "a series, a list of numbers or a fit", (v): v is Series | ArrayLike<number> | Fit => isNumbers(v) || isFit(v));
}

export function fit(name = "fit"): Param<Fit> {
  return param(name, "a fit, such as the name of a fit cell", (v): v is Fit => isFit(v));
}

export function forecaster(name: string): Param<Forecaster> {
  return { name, expected: "a fit or a rule", read: forecasterOf };
}

/** A fit or rule; a ranked row of a comparison stands for the model in it. */
export function forecasterOf(value: unknown): { readonly value: Forecaster } | null {
  if (isFit(value)) return { value };
  if (typeof value !== "object" || value === null) return null;
  if ("rule" in value && "series" in value) return { value: value as Forecaster };
  const inner = "model" in value ? value.model : "fit" in value ? value.fit : null;
  return inner === null || inner === value ? null : forecasterOf(inner);
}

/** Settings by name, of which only those listed are known. */
export function settings<const N extends string>(name: string, known: readonly N[]): Param<Readonly<Partial<Record<N, unknown>>>> {
  return {
    name, expected: `an object with ${known.join(", ")}`,
    read: (value) => {
      if (typeof value !== "object" || value === null || Array.isArray(value) || ArrayBuffer.isView(value) || isSeries(value) || isFit(value)) return null;
      const odd = Object.keys(value).find((key) => !known.includes(key as N));
      if (odd !== undefined) throw new RangeError(`${name} has no "${odd}"; it takes ${known.join(", ")}`);
      return { value: Object.fromEntries(Object.entries(value).filter(([, v]) => v !== null && v !== undefined)) as Partial<Record<N, unknown>> };
    },
  };
}

function isNumbers(value: unknown): value is Series | ArrayLike<number> {
  if (isSeries(value)) return true;
  if (ArrayBuffer.isView(value)) return !(value instanceof DataView);
  return Array.isArray(value) && value.every((v) => typeof v === "number");
}
