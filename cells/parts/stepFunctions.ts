// Transform steps as functions: of their settings they give a step, of a series the series after the step.

import { applyStep, isSeries, type Series, type Step } from "../../stdlib/index.ts";

type Given = readonly unknown[];

/** A step's function: what it makes of the arguments after the series. */
export interface StepFunction {
  readonly signature: string;
  readonly sentence: string;
  readonly make: (rest: Given) => Step;
}

export const stepFunctions: Readonly<Record<string, StepFunction>> = {
  log: { signature: "log(series)", sentence: "Natural logarithm; of a number, a number. As a step, forecasts come back exactly.", make: () => ({ step: "log" }) },
  boxCox: { signature: "boxCox(series, lambda)", sentence: "Box-Cox transform (x^lambda - 1) / lambda, the logarithm at lambda 0.", make: ([lambda]) => ({ step: "boxCox", lambda: numberFor("boxCox", "lambda", lambda, "a number such as 0.5") }) },
  difference: { signature: "difference(series, lag)", sentence: "Each value less the one `lag` periods earlier (1 unless given).", make: ([lag]) => ({ step: "difference", lag: lag === undefined || lag === null ? 1 : numberFor("difference", "lag", lag, "a whole number of periods, 1 or more", (v) => Number.isInteger(v) && v >= 1) }) },
  scale: { signature: "scale(series, factor, unit)", sentence: "Values times a factor, with the unit that results.", make: ([factor, unit]) => ({ step: "scale", factor: numberFor("scale", "factor", factor, "a number other than 0", (v) => v !== 0), ...(unit === undefined || unit === null ? {} : { unit: textFor("scale", "unit", unit) }) }) },
  perDay: { signature: "perDay(series)", sentence: "Values divided by the days of their period.", make: () => ({ step: "perDay" }) },
  detrend: { signature: "detrend(series, degree)", sentence: "Values less their polynomial trend (degree 1, a line, unless given).", make: ([degree]) => ({ step: "detrend", degree: degree === undefined || degree === null ? 1 : numberFor("detrend", "degree", degree, "a whole number from 0 (a level) to 10", (v) => Number.isInteger(v) && v >= 0 && v <= 10) }) },
  seasonallyAdjust: { signature: "seasonallyAdjust(series, length)", sentence: "Values less their seasonal part; the season's length is that of the spacing unless given.", make: ([length]) => ({ step: "seasonallyAdjust", ...(length === undefined || length === null ? {} : { length: numberFor("seasonallyAdjust", "length", length, "a whole number of periods, 2 or more", (v) => Number.isInteger(v) && v >= 2) }) }) },
  fill: { signature: "fill(series, how)", sentence: "Missing values filled: \"linear\" (unless given), \"previous\" or \"model\".", make: ([how]) => ({ step: "fill", how: wordFor("fill", "how", how ?? "linear", ["linear", "previous", "model"]) }) },
  aggregate: { signature: "aggregate(series, to, how)", sentence: "Whole longer periods: \"sum\" (unless given), \"mean\" or \"last\".", make: ([to, how]) => ({ step: "aggregate", to: textFor("aggregate", "to", to, "\"quarter\""), how: wordFor("aggregate", "how", how ?? "sum", ["sum", "mean", "last"]) }) },
};

/** The functions themselves, by name. */
export const stepCalls: Readonly<Record<string, (...given: Given) => unknown>> = Object.fromEntries(
  Object.entries(stepFunctions).map(([name, one]) => [name, (...given: Given) => callStep(name, one, given)]),
);

function callStep(name: string, { make }: StepFunction, given: Given): Step | Series | number {
  const [first, ...rest] = given;
  if (isSeries(first)) return applyStep(first, make(rest));
  if (name === "log" && typeof first === "number") return Math.log(first);
  return make(given);
}

const bare = new Map<unknown, string>(Object.entries(stepCalls).map(([name, call]) => [call, name]));

/** A step of what stands in a list of steps: a step, or the bare name of one (`log`).
 *  @returns null where it is none
 *  @throws RangeError where a bare name needs an argument */
export function stepFrom(item: unknown): Step | null {
  const name = bare.get(item);
  if (name !== undefined) return stepFunctions[name].make([]);
  if (typeof item === "object" && item !== null && "step" in item && typeof item.step === "string" && Object.hasOwn(stepFunctions, item.step)) return item as Step;
  return null;
}

function numberFor(name: string, what: string, value: unknown, expected: string, ok: (v: number) => boolean = () => true): number {
  if (typeof value === "number" && Number.isFinite(value) && ok(value)) return value;
  throw new RangeError(`${name}: ${what} is ${shown(value)}; give ${expected}${value === undefined ? `, as in ${name}(${name === "boxCox" ? "0.5" : "2"})` : ""}`);
}

function textFor(name: string, what: string, value: unknown, example = "a text in quotes"): string {
  if (typeof value === "string") return value;
  throw new RangeError(`${name}: ${what} is ${shown(value)}; give ${example === "a text in quotes" ? example : `a text such as ${example}`}`);
}

function wordFor<T extends string>(name: string, what: string, value: unknown, words: readonly T[]): T {
  const found = words.find((word) => word === value);
  if (found !== undefined) return found;
  throw new RangeError(`${name}: ${what} is ${shown(value)}; give ${words.map((w) => `"${w}"`).join(", ")}`);
}

function shown(value: unknown): string {
  if (value === undefined || value === null) return "not given";
  if (typeof value === "string") return `"${value}"`;
  if (typeof value === "number" || typeof value === "boolean") return String(value);
  return isSeries(value) ? "a series" : Array.isArray(value) ? "a list" : `of type ${typeof value}`;
}
