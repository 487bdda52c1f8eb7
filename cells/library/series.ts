// Functions of series: steps, small questions, series against each other.

import { at, between, combine, first, isSeries, lagged, last, mean, sd, variance, type Series } from "../../stdlib/index.ts";
import { stepCalls, stepFunctions } from "../parts/stepFunctions.ts";
import type { LibraryFunction } from "../kind.ts";
import { define, numbers, optional, param, series, time, whole } from "./define.ts";

const topic = "series";

export const seriesFunctions: readonly LibraryFunction[] = [
  define(topic, "mean", [numbers("x")], "Mean of the observed values.", (x) => mean(x)),
  define(topic, "sd", [numbers("x")], "Standard deviation of the observed values, divisor n - 1.", (x) => sd(x)),
  define(topic, "variance", [numbers("x")], "Variance of the observed values, divisor n - 1.", (x) => variance(x)),
  define(topic, "first", [items("x")], "The first value of a series, or item of a list.", (x) => (isTexts(x) ? x[0] : first(x as Series))),
  define(topic, "last", [items("x")], "The last value of a series, or item of a list.", (x) => (isTexts(x) ? x[x.length - 1] : last(x as Series))),
  define(topic, "at", [series(), time("time")], "The value at a time.", (s, t) => at(s, t)),
  define(topic, "between", [series(), optional(time("from")), optional(time("to"))], "The part between two times, both ends included; null leaves an end open.", (s, from, to) => between(s, from, to)),
  define(topic, "lagged", [series(), whole("k", -Infinity)], "The values k periods earlier, at the same times.", (s, k) => lagged(s, k)),
  define(topic, "combine", [seriesOrNumber("a"), seriesOrNumber("b"), callback("f")], "A function of two series, period by period, where both have data, as in combine(a, b, (x, y) => x / y).", (a, b, f) => combine(a, b, (x, y) => f(x, y) as number)),
  ...Object.entries(stepFunctions).map(([name, { signature, sentence }]): LibraryFunction => ({ name, signature, sentence, topic: "steps", call: stepCalls[name] })),
];

function items(name: string) {
  return param(name, "a series or a list", (v): v is Series | readonly unknown[] => isSeries(v) || Array.isArray(v) || (ArrayBuffer.isView(v) && !(v instanceof DataView)));
}

/** A list of anything but numbers: its items are given as they are. */
function isTexts(value: Series | readonly unknown[]): value is readonly unknown[] {
  return Array.isArray(value) && value.some((item) => typeof item !== "number");
}

function seriesOrNumber(name: string) {
  return param(name, "a series or a number", (v): v is Series | number => isSeries(v) || typeof v === "number");
}

function callback(name: string) {
  return param(name, "a function such as (x, y) => x / y", (v): v is (...args: readonly number[]) => unknown => typeof v === "function");
}
