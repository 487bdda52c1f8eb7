// Plain functions of numbers and lists.

import { chiSquareUpper, normalCdf, normalQuantile, tUpper, valuesOf } from "../../stdlib/index.ts";
import type { LibraryFunction } from "../kind.ts";
import { define, number, numbers, optional, share, whole } from "./define.ts";

const topic = "plain", distributions = "distributions";
const mostItems = 1_000_000;

export const plainFunctions: readonly LibraryFunction[] = [
  define(topic, "range", [number("from"), number("to"), optional(number("step"))], "Numbers from one to another, both ends included.", (from, to, step = 1) => range(from, to, step)),
  define(topic, "round", [number("x"), optional(whole("digits", -15, 15))], "Rounded to some decimals (0 unless given), halves away from zero.", (x, digits = 0) => rounded(x, digits)),
  gathered("sum", "Sum of a list, a series or several numbers; missing values are left out.", (values) => values.reduce((a, b) => a + b, 0)),
  gathered("min", "Smallest of a list, a series or several numbers; missing values are left out.", (values) => (values.length === 0 ? NaN : values.reduce((a, b) => Math.min(a, b)))),
  gathered("max", "Largest of a list, a series or several numbers; missing values are left out.", (values) => (values.length === 0 ? NaN : values.reduce((a, b) => Math.max(a, b)))),
  define(topic, "abs", [number("x")], "A number without its sign.", Math.abs),
  define(topic, "sqrt", [number("x", { expected: "a number; of a list, use list.map(x => sqrt(x))" })], "Square root.", (x) => {
    if (x < 0) throw new RangeError(`sqrt: x is ${x}; a square root takes 0 or more`);
    return Math.sqrt(x);
  }),
  define(topic, "exp", [number("x", { expected: "a number; of a list, use list.map(x => exp(x))" })], "Exponential, the inverse of log.", Math.exp),
  define(distributions, "normalCdf", [number("x")], "Probability that a standard normal is at most x.", (x) => normalCdf(x)),
  define(distributions, "normalQuantile", [share("p")], "Value that a standard normal stays below with probability p.", (p) => normalQuantile(p)),
  define(distributions, "chiSquareUpper", [number("x"), number("df", { min: 0, expected: "a number above 0" })], "Probability that a chi-square exceeds x: the p-value of a statistic.", (x, df) => chiSquareUpper(x, df)),
  define(distributions, "tUpper", [number("x"), number("df", { min: 0, expected: "a number above 0" })], "Probability that a Student's t exceeds x.", (x, df) => tUpper(x, df)),
];

/** A function of one list or series, or of several numbers. Unlike the others it takes any count of arguments. */
function gathered(name: string, sentence: string, of: (values: Float64Array) => number): LibraryFunction {
  const one = define(topic, name, [numbers("list")], sentence, (list) => of(valuesOf(list).filter((v) => !Number.isNaN(v))));
  const call = (...given: readonly unknown[]): unknown => (given.length > 0 && given.every((v) => typeof v === "number") ? one.call([...given]) : one.call(...given));
  return { ...one, call };
}

function range(from: number, to: number, step: number): number[] {
  if (!Number.isFinite(from) || !Number.isFinite(to) || !Number.isFinite(step) || step === 0) throw new RangeError(`range: from ${from} to ${to} by ${step} has no end; give three numbers, the step not 0`);
  const count = Math.floor((to - from) / step + 1e-9) + 1;
  if (count > mostItems) throw new RangeError(`range: from ${from} to ${to} by ${step} is ${count} numbers, more than ${mostItems}`);
  return Array.from({ length: Math.max(0, count) }, (_, k) => Number((from + k * step).toPrecision(15)));
}

/** Rounds the decimal text of the number, so that 1.005 to two digits is 1.01 as it reads. */
function rounded(x: number, digits: number): number {
  if (!Number.isFinite(x)) return x;
  const [mantissa, exponent = "0"] = String(Math.abs(x)).split("e");
  const shifted = Math.round(Number(`${mantissa}e${Number(exponent) + digits}`));
  const [m, e = "0"] = String(shifted).split("e");
  return Math.sign(x) * Number(`${m}e${Number(e) - digits}`);
}
