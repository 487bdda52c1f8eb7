// Checks what an author gave a kind against its option table, and fills in the defaults. Cells and function forms alike.

import { OptionError } from "./kind.ts";
import type { Kind, Option, OptionTable, OptionType } from "./kind.ts";

type Given = Readonly<Record<string, unknown>>;

/** Options ready for `run`: unknown ones refused, types and bounds checked, defaults filled in; null counts as left out.
 *  @param kind   name, body and option table; a "names" body may hold names that the table does not
 *  @param given  option values as evaluated
 *  @param sources  their expressions, as far as there are any
 *  @throws OptionError naming the option, what was found, what was expected
 *  Cost O(options), and O(length) for lists. */
export function checkOptions(kind: { readonly name: string; readonly body: Kind["body"]; readonly options: OptionTable }, given: Given, sources: Readonly<Record<string, string>> = {}): Given {
  const checked: Record<string, unknown> = {};
  for (const [name, value] of Object.entries(given)) {
    const option = Object.hasOwn(kind.options, name) ? kind.options[name] : undefined;
    if (option === undefined) {
      if (kind.body === "names") { checked[name] = value; continue; }
      throw new OptionError(name, unknownOption(kind.name, name, Object.keys(kind.options)));
    }
    if (value === null || value === undefined) continue;
    checked[name] = checkOption(name, option, value, Object.hasOwn(sources, name) ? sources[name] : undefined);
  }
  for (const [name, option] of Object.entries(kind.options)) {
    if (Object.hasOwn(checked, name)) continue;
    if (option.required) throw new OptionError(name, `\`${kind.name}\` needs \`${name}\`: ${option.sentence}`);
    if (option.default !== undefined) checked[name] = option.default;
  }
  return checked;
}

/** One option's value against its type and bounds. @throws OptionError */
function checkOption(name: string, option: Option, value: unknown, source?: string): unknown {
  if (option.taken === "name" || option.taken === "expression") return value;
  const fault = faultOf(option.type, value);
  if (fault !== null) throw new OptionError(name, refusal(name, option, value, fault, source));
  const beyond = boundsFault(option, value);
  if (beyond !== null) throw new OptionError(name, `\`${name}\` ${beyond}`);
  return value;
}

/** What was found and what was expected: of the one item that is at fault where a list holds it; with what to write, where that can be told. */
function refusal(name: string, { type, slip }: Option, value: unknown, fault: string, source: string | undefined): string {
  const instead = slip?.(value) ?? null;
  if (instead !== null) return `\`${name}\` is ${describe(value)}: write \`${instead}\``;
  if (isListType(type)) {
    if (isArrayLike(value) && type !== "list") {
      const item = Array.from(value).findIndex((each) => faultOf(type.listOf, each) !== null);
      return `item ${item + 1} of \`${name}\` is ${describe(value[item])}, expected ${faultOf(type.listOf, value[item])}`;
    }
    // One item where a list of such is wanted only lacks its brackets.
    const written = source ?? (typeof value === "number" || typeof value === "string" ? JSON.stringify(value) : null);
    if (written !== null && !isPlainObject(value) && (type === "list" || faultOf(type.listOf, value) === null)) return `\`${name}\` is ${describe(value)}, expected a list in brackets: write \`[${written}]\``;
  }
  return `\`${name}\` is ${describe(value)}, expected ${fault}`;
}

function isListType(type: OptionType): type is "list" | { readonly listOf: OptionType } {
  return type === "list" || (typeof type === "object" && "listOf" in type);
}

/** A value in a few words, for messages: "the number 2", "a series of 144 values", "nothing". */
export function describe(value: unknown): string {
  if (value === null || value === undefined) return "not given";
  if (typeof value === "number") return Number.isNaN(value) ? "NaN (missing)" : `the number ${value}`;
  if (typeof value === "string") return `the text ${JSON.stringify(value.length > 40 ? `${value.slice(0, 40)}…` : value)}`;
  if (typeof value === "boolean") return String(value);
  if (typeof value === "function") return "a function";
  if (isArrayLike(value)) return value.length === 0 ? "an empty list" : `a list of ${value.length} item${value.length === 1 ? "" : "s"}`;
  if (isSeries(value)) return `a series of ${value.n} values`;
  if (isFit(value)) return "a fit";
  if (isRule(value)) return "a rule";
  const keys = Object.keys(value);
  if (keys.length === 0) return "an empty object";
  return `an object with ${keys.slice(0, 6).map((key) => `\`${key}\``).join(", ")}${keys.length > 6 ? ", …" : ""}`;
}

/** null where the value is of the type; else what was expected, with a hint where a common slip is recognised. */
function faultOf(type: OptionType, value: unknown): string | null {
  if (typeof type === "object") {
    if ("oneOf" in type) return type.oneOf.includes(value as string) ? null : `one of ${type.oneOf.map((each) => JSON.stringify(each)).join(", ")}`;
    if ("anyOf" in type) return anyOfFault(type.anyOf, value);
    return listFault(type.listOf, value);
  }
  switch (type) {
    case "any": return null;
    case "number": return numberFault(value);
    case "integer": return numberFault(value) ?? (Number.isInteger(value) ? null : "a whole number");
    case "boolean": return typeof value === "boolean" ? null : "`true` or `false`";
    case "text": return typeof value === "string" ? null : "a text in quotes";
    case "time": return timeFault(value);
    case "level": return levelFault(value);
    case "lags": return lagsFault(value);
    case "series": return seriesFault(value);
    case "fit": return isFit(value) ? null : `a fit${isRow(value) ? ": use the row's `.fit`" : ""}`;
    case "forecaster": return isFit(value) || isRule(value) || isRow(value) ? null : "a fit, a rule (such as `rule.naive(series)`), or a ranked row of a comparison";
    case "window": return windowFault(value);
    case "list": return isArrayLike(value) ? null : "a list in brackets: `[…]`";
    case "object": return isPlainObject(value) ? null : "an object in braces: `{name: value}`";
    case "rows": return isPlainObject(value) || isArrayLike(value) ? null : "rows (a list of objects), a series or a forecast";
  }
}

function numberFault(value: unknown): string | null {
  if (typeof value !== "number") return typeof value === "string" && value.trim() !== "" && Number.isFinite(Number(value)) ? "a number, without quotes" : "a number";
  return Number.isNaN(value) ? "a number that is not missing" : null;
}

function timeFault(value: unknown): string | null {
  if (typeof value === "number") return "a time: quote the date, as in \"2019-03\"";
  if (typeof value !== "string") return "a time in quotes, as in \"2019-03\"";
  return /^[+-]?\d+([-WQTtHhPpS:.Z+\d]*)$/i.test(value.trim()) ? null : "an ISO 8601 time, as in \"2019-03\", \"2019-Q1\" or \"2019-03-05\"";
}

function levelFault(value: unknown): string | null {
  if (typeof value !== "number" || Number.isNaN(value)) return "a confidence level between 0 and 1, as in 0.95";
  if (value > 0 && value < 1) return null;
  return `a confidence level between 0 and 1${value > 1 && value < 100 ? `: write ${value / 100} for ${value}%` : ", as in 0.95"}`;
}

function lagsFault(value: unknown): string | null {
  if (typeof value === "number") return Number.isInteger(value) && value >= 0 ? null : "a whole number of lags, 0 or more";
  if (!isArrayLike(value)) return "a whole number of lags, or a list of lags such as [1, 12]";
  for (let i = 0; i < value.length; i += 1) {
    if (!(Number.isInteger(value[i]) && (value[i] as number) >= 1)) return `a list of lags, each a whole number of at least 1 (item ${i + 1} is ${describe(value[i])})`;
  }
  return null;
}

function seriesFault(value: unknown): string | null {
  if (isSeries(value)) return null;
  if (isFit(value)) return "a series: use the fit's `.residuals`, or the series that it was given";
  if (isPlainObject(value)) {
    const inside = Object.entries(value).filter(([, item]) => isSeries(item)).map(([key]) => key);
    if (inside.length > 0) return `a series: choose one of it, as in \`.${inside[0]}\` (there ${inside.length === 1 ? "is" : "are"} ${inside.slice(0, 6).map((key) => `\`${key}\``).join(", ")})`;
  }
  return "a series, such as the name of a `load` or `transform` cell";
}

function windowFault(value: unknown): string | null {
  if (typeof value === "string") return "a window: the name of a `window` cell, or `{from: \"2019-01\", to: \"2023-12\"}`";
  if (!isPlainObject(value) || isSeries(value) || isFit(value)) return "a window: the name of a `window` cell, or `{from: …, to: …}`";
  for (const end of ["from", "to"]) {
    const time = Object.hasOwn(value, end) ? value[end] : null;
    if (time === null || time === undefined) continue;
    const fault = timeFault(time);
    if (fault !== null) return `a window whose \`${end}\` is ${fault} (it is ${describe(time)})`;
  }
  return "from" in value || "to" in value ? null : "a window with `from` or `to`";
}

function listFault(item: OptionType, value: unknown): string | null {
  if (!isArrayLike(value)) return `a list in brackets, each item ${faultOf(item, undefined) ?? "anything"}`;
  for (let i = 0; i < value.length; i += 1) {
    const fault = faultOf(item, value[i]);
    if (fault !== null) return `a list: item ${i + 1} is ${describe(value[i])}, expected ${fault}`;
  }
  return null;
}

function anyOfFault(types: readonly OptionType[], value: unknown): string | null {
  const faults: string[] = [];
  for (const type of types) {
    const fault = faultOf(type, value);
    if (fault === null) return null;
    if (!faults.includes(fault)) faults.push(fault);
  }
  return faults.join(", or ");
}

function boundsFault(option: Option, value: unknown): string | null {
  const numbers = typeof value === "number" ? [value] : isArrayLike(value) && (option.type === "lags" || typeof option.type === "object") ? value : [];
  for (let i = 0; i < numbers.length; i += 1) {
    const each = numbers[i];
    if (typeof each !== "number") continue;
    if (option.min !== undefined && each < option.min) return `is ${each}, expected at least ${option.min}`;
    if (option.max !== undefined && each > option.max) return `is ${each}, expected at most ${option.max}`;
  }
  return null;
}

function unknownOption(kind: string, name: string, known: readonly string[]): string {
  const near = known.find((each) => closeNames(each, name));
  const list = known.length === 0 ? "it takes none" : `it takes ${known.map((each) => `\`${each}\``).join(", ")}`;
  return `\`${kind}\` has no option \`${name}\`${near === undefined ? `: ${list}` : `: did you mean \`${near}\`?`}`;
}

/** One letter changed, added, left out or swapped, or a common beginning: what a slip of the finger gives. */
function closeNames(a: string, b: string): boolean {
  const x = a.toLowerCase(), y = b.toLowerCase();
  if (x === y || (Math.min(x.length, y.length) >= 3 && (x.startsWith(y) || y.startsWith(x)))) return true;
  if (Math.abs(x.length - y.length) > 1) return false;
  let head = 0;
  while (head < x.length && head < y.length && x[head] === y[head]) head += 1;
  const swapped = x.slice(0, head) + (x[head + 1] ?? "") + (x[head] ?? "") + x.slice(head + 2);
  return swapped === y || x.slice(head + 1) === y.slice(head + 1) || x.slice(head + 1) === y.slice(head) || x.slice(head) === y.slice(head + 1);
}

function isArrayLike(value: unknown): value is ArrayLike<unknown> {
  return Array.isArray(value) || (ArrayBuffer.isView(value) && !(value instanceof DataView));
}

function isPlainObject(value: unknown): value is Readonly<Record<string, unknown>> {
  return typeof value === "object" && value !== null && !isArrayLike(value);
}

function isSeries(value: unknown): value is { readonly n: number } {
  return isPlainObject(value) && isArrayLike(value["values"]) && isArrayLike(value["times"]) && typeof value["n"] === "number";
}

function isFit(value: unknown): boolean {
  return isPlainObject(value) && isArrayLike(value["phi"]) && isArrayLike(value["theta"]) && typeof value["sigma2"] === "number";
}

function isRule(value: unknown): boolean {
  return isPlainObject(value) && typeof value["rule"] === "string" && isSeries(value["series"]);
}

/** A ranked row of a comparison: it holds the model that it ranks. */
function isRow(value: unknown): boolean {
  return isPlainObject(value) && (isFit(value["fit"]) || isRule(value["fit"]) || isFit(value["model"]) || isRule(value["model"]));
}
