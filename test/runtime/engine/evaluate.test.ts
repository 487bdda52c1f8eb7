import { describe, expect, test } from "vitest";
import { parseExpression } from "../../../runtime/text/expression.ts";
import { compile } from "../../../runtime/engine/evaluate.ts";
import { EvaluationError } from "../../../runtime/engine/values.ts";

class Point { x = 1; get secret(): string { return "leak"; } method(): string { return "leak"; } }
const getter = Object.defineProperty({ plain: 1 }, "trap", { get: () => "leak", enumerable: true });
const library = { abs: Math.abs, twice: (x: number) => 2 * x, call: (f: (x: number) => unknown, x: number) => f(x), throws: () => { throw new RangeError("twice: x is 3, expected 0 to 2"); }, thrower: () => { throw new TypeError("odd"); } };
const names: Readonly<Record<string, unknown>> = {
  ...library, NaN, Infinity, rule: Object.freeze({ naive: (x: unknown) => ({ rule: "naive", x }) }),
  fit: { aic: 12.5, sigma2: 2, phi: Float64Array.of(0.5, -0.25), label: "airline", se: { phi: [0.1] }, "odd key": 3 },
  series: { n: 3, values: Float64Array.of(1, 2, NaN), times: ["a", "b", "c"], name: "s" },
  list: [3, 1, 2], word: "crossing", point: new Point(), getter, nothing: null, uncalled: () => "leak", yes: true, date: new Date(0),
};

function run(source: string, claim = false): unknown {
  const parsed = parseExpression(source);
  if (parsed.tree === null) throw new EvaluationError(parsed.faults[0].message, parsed.faults[0]);
  const callables = new WeakSet<object>([...Object.values(library), (names["rule"] as { naive: object }).naive]);
  return compile(parsed.tree)({ callables, claim, lookup: (name) => { if (!Object.hasOwn(names, name)) throw new EvaluationError(`There is no \`${name}\``); return names[name]; } });
}

describe("expressions give what ECMAScript gives", () => {
  test.each<[string, unknown]>([
    ["(1 + 2)", 3], ["((word))", "crossing"], ["(nothing?.x)?.y", undefined], ["({a: 1}).a", 1], ["1 + 2 * 3 ** 2 - 10 / 4 % 2", 18.5], ["-abs(-3)", -3], ["`${word}: ${fit.aic}`", "crossing: 12.5"], ["'a' + \"b\"", "ab"],
    ["[...list, ...[4]]", [3, 1, 2, 4]], ["{a: 1, ...{b: 2}, ['c']: 3, word}", { a: 1, b: 2, c: 3, word: "crossing" }], ["fit['odd key']", 3], ["fit.phi[1]", -0.25],
    ["list.map(x => x * 2)", [6, 2, 4]], ["fit.phi.map(x => x * 2)", [1, -0.5]], ["list.filter((x, i) => i > 0)", [1, 2]], ["list.reduce((a, b) => a + b, 0)", 6], ["list.toSorted()", [1, 2, 3]], ["list.toSorted((a, b) => b - a)[0]", 3],
    ["list.length + word.length + fit.phi.length", 13], ["word.slice(0, 3).toUpperCase()", "CRO"], ["word[0]", "c"], ["list.at(-1)", 2], ["fit.aic.toFixed(2)", "12.50"],
    ["nothing?.x", undefined], ["nothing?.x.y.z", undefined], ["nothing?.f()", undefined], ["fit?.nope ?? 7", 7], ["nothing ?? 5", 5], ["fit.se?.phi?.[0]", 0.1],
    ["yes && !false || false", true], ["1 < 2 ? 'y' : 'n'", "y"], ["'a' < 'b'", true], ["1 === 1 && 1 !== 2", true], ["1 == 1 && word != 'x'", true], ["word == null", false], ["'' === 0", false],
    ["((a, {b, c = 4}, [d, ...e]) => [a, b, c, d, e])(1, {b: 2}, [5, 6, 7])", [1, 2, 4, 5, [6, 7]]], ["(x => y => x + y)(1)(2)", 3], ["((...all) => all.length)(1, 2, 3)", 3], ["((a, b = a + 1) => b)(4)", 5],
    ["call(x => x + 1, 2)", 3], ["rule.naive(series).rule", "naive"], ["[1, 2].map(twice)", [2, 4]], ["NaN < 1", false], ["series.values.length", 3], ["[[1], [2]].flat()", [1, 2]], ["word.replace('c', 'k')", "krossing"],
  ])("%s", (source, value) => { expect(run(source)).toEqual(value); });
});

describe("faults say what was found and what to use", () => {
  test.each<[string, RegExp]>([
    ["series + 1", /works on two numbers or two texts; here is a series: for a series use `combine/], ["fit * 2", /here is a fit: use one of its numbers, such as `\.aic`/], ["list - 1", /for a list use `list\.map/], ["1 + '2'", /the text "2": write the number without quotes/],
    ["fit.aicc", /There is no `aicc` here: did you mean `aic`\?/], ["fit.zzz", /there are `aic`, `sigma2`/], ["list[3]", /the list has 3, counted from \[0\] to \[2\]/], ["list[-1]", /use `\.at\(-1\)`/], ["list.sort()", /read-only here: use `toSorted`/], ["list.push(1)", /use `concat`/], ["word.toUpercase()", /did you mean `toUpperCase`/], ["list.map", /no property `map`/],
    ["abs.name", /A function has no property `name`/], ["nothing.x", /nothing to read `x` from/], ["(5).foo()", /no method `foo`/], ["fit()", /`fit` is not a function/], ["1 < 'a'", /a number and a text/], ["fit < 1", /compares two numbers or two texts; here is a fit/],
    ["fit ? 1 : 2", /A condition is true or false/], ["`${fit}`", /A template takes/], ["throws()", /twice: x is 3, expected 0 to 2/], ["list.map(5)", /takes a function/], ["[...5]", /takes a list/], ["({...5})", /takes an object/], ["((1 + 2)", /stops too early/], ["(f => f(f))(f => f(f))", /calls itself without end/], ["-word", /works on two numbers/],
    ["1 == '1'", /`==` compares two values of one type; here are .*number.* and .*text/], ["a = 1", /write `==` to compare/], ["2 ^ 3", /write `\*\*`/], ["undefined", /Write `null`/], ["2019-03", /Quote the date: write "2019-03"/], ["2019-Q1", /Quote the date/], ["2019-03-05T14:00Z", /Quote the date/], ["2024-11-30", /Quote the date/], ["x => { return x }", /one expression here/], ["new Date()", /`new` is not part/], ["this", /`this` is not part/], ["function () {}", /arrow function/], ["/a/", /Regular expressions/], ["1n", /without the `n`/], ["typeof x", /`typeof` is not part/], ["void 0", /`void` is not part/], ["[1,,2]", /empty place/], ["async x => x", /`async` is not part/], ["import('x')", /`import` is not part/], ["a, b", /One value is expected/], ["a b", /left over|not expected/], ["x++", /only gives a value/], ["tag`x`", /cannot be called/], ["1 +", /stops too early/], ["'abc", /not closed/], ["", /no expression/],
  ])("%s", (source, message) => { expect(() => run(source)).toThrow(message); });

  test("a fault has its place in the source", () => {
    try { run("1 + fit.zzz * 2"); expect.unreachable(); } catch (error) { expect(error instanceof EvaluationError && error.place).toEqual({ from: 4, to: 11 }); }
  });
});

describe("nothing reaches beyond own plain data", () => {
  test.each([
    "fit.constructor", "list.constructor", "word.constructor", "(5).constructor", "abs.constructor", "(x => x).constructor", "fit['constr' + 'uctor']", "fit.__proto__", "list['__proto__']", "fit.__defineGetter__", "fit.hasOwnProperty('x')", "fit.toString()", "list.toString()", "fit.valueOf()",
    "abs.call(null, 1)", "abs.apply(null, [1])", "abs.bind(null)", "(x => x).call(1)", "point.secret", "point.method()", "getter.trap", "({...getter})", "uncalled()", "[1].map(uncalled)", "list.map.constructor", "list.__lookupGetter__('x')", "date.getTime()", "series.values.buffer", "series.values.subarray(0)", "series.values.set([9])", "series.values.fill(0)",
    "({__proto__: fit})", "({'__proto__': fit})", "({['__proto__']: fit})", "({...{['__pro' + 'to__']: 1}})", "(({constructor}) => constructor)({})", "(({['constructor']: c}) => c)(fit)", "(([...a]) => a)(5)", "word.at.constructor", "rule.constructor", "rule.naive.constructor", "rule.naive.prototype",
    "globalThis", "window", "self", "Function", "eval", "Object", "process", "require", "Symbol", "Reflect", "Math", "fit[Symbol]", "fit?.constructor.constructor", "list?.constructor('return 1')()", "arguments", "word.repeat(2000000)", "word.padEnd(1e9)", "fit[{}]", "fit[[1]]", "list[['length']]", "import.meta", "new.target", "super.x", "word.match('c')", "word.matchAll('c')", "word.replaceAll('c', uncalled)",
  ])("%s is refused", (source) => { expect(() => run(source)).toThrow(EvaluationError); });

  test("`?.` on what is not own gives nothing, never what is inherited", () => {
    expect(run("fit?.constructor")).toBeUndefined();
    expect(run("fit?.toString")).toBeUndefined();
    expect(run("list?.__proto__")).toBeUndefined();
  });

  test("objects made by expressions have no key that reaches the prototype", () => {
    const made = run("{a: 1}") as object;
    expect(Object.getPrototypeOf(made)).toBe(Object.prototype);
    expect(Object.keys(made)).toEqual(["a"]);
  });
});

describe("claims and missing data", () => {
  test.each(["NaN < 1", "series.values[2] > 0", "NaN === 1", "!NaN", "NaN ? true : false", "series.values.every(x => x > 0)", "NaN && true"])("%s is undecided", (source) => { expect(() => run(source, true)).toThrow(/missing \(NaN\)/); });
  test("what does not look at missing data is decided", () => {
    expect(run("1 < 2 || NaN < 1", true)).toBe(true);
    expect(run("series.values.slice(0, 2).every(x => x > 0)", true)).toBe(true);
  });
});
