import { describe, expect, it } from "vitest";
import { parseExpression } from "../../../runtime/text/expression.ts";
import { compile } from "../../../runtime/engine/evaluate.ts";

// Expressions of a stranger: each ends within seconds, in little memory, and says why it was not computed.

const range = (from: number, to: number): number[] => Array.from({ length: to - from + 1 }, (_, i) => from + i);
const big = range(1, 1_000_000), long = "ab".repeat(400_000);

function value(source: string): unknown {
  const { tree, faults } = parseExpression(source);
  if (tree === null) throw new Error(faults[0].message);
  const names: Record<string, unknown> = { range, big, long, max: Math.max, Infinity };
  return compile(tree)({ callables: new WeakSet([range, Math.max]), lookup: (name) => names[name] });
}

describe("an expression", { timeout: 90_000 }, () => {
  it("may go through as much as anybody needs", () => {
    expect(value("big.map(x => x + 1).filter(x => x > 10).reduce((a, b) => a + b, 0)")).toBe(500_001_499_946);
    expect(value("range(1, 1000).map(a => range(1, 300).map(b => a * b)).flat().length")).toBe(300_000);
    expect(value("[...big, ...big].length")).toBe(2_000_000);
    expect(value("range(1, 100000).map(x => `${x}`).join(\" \").length")).toBe(588_894);
    expect(value("\"a,b,c\".replaceAll(\",\", \"; \")")).toBe("a; b; c");
    expect(value("\"a-b\".replace(\"-\", x => x + x)")).toBe("a--b");
    expect(value("[1, [2, [3, [4]]]].flat(2).length + [[1, 2], [3]].flatMap(x => x).length")).toBe(7);
  });

  it.each([
    ["lists in lists", "big.map(a => range(1, 1000))"], ["a million lists of a million", "big.flatMap(a => big)"], ["the same without arrow calls", "range(1, 1000).map(a => big).flat()"],
    ["spreads that double", "range(1, 40).reduce((a, b) => [...a, ...a], [1])"], ["concat that doubles", "range(1, 40).reduce((a, b) => a.concat(a), [1])"], ["flat that doubles", "range(1, 60).reduce((a, b) => [a, a], [1]).flat(Infinity)"],
    ["a search in a loop", "big.map(a => big.includes(-1))"], ["a sum in a loop", "big.map(a => big.reduce((x, y) => x + y, 0))"], ["copies of slices", "big.map(a => big.slice(0))"], ["letters", "big.map(a => long.split(\"\"))"],
    ["objects", "range(1, 5000).map(a => range(1, 5000).map(b => ({a: a, b: b})))"], ["a function that calls itself by another", "(f => f(f, 30))((f, n) => n < 1 ? 1 : f(f, n - 1) + f(f, n - 1))"],
    ["a long text sought in a long text", "range(1, 100).map(n => long.includes(\"b\" + \"ab\".repeat(200000) + \"c\"))"],
  ])("stops where it would go through too much: %s", (_, source) => {
    expect(() => value(source)).toThrow(/goes through more than 10 million items and is not computed: narrow it/);
  });

  it.each([
    ["sums", "range(1, 60).reduce((a, b) => a + a, \"ab\")"], ["templates", "range(1, 60).reduce((a, b) => `${a}${a}`, \"ab\")"], ["repeat", "\"ab\".repeat(1000000)"], ["padStart", "\"a\".padStart(1e9)"], ["concat", "long.concat(long)"],
    ["join", "range(1, 1000).map(a => long).join()"], ["a long separator", "big.join(long)"], ["replaceAll", "long.replaceAll(\"a\", long)"], ["replaceAll by a pattern", "long.replaceAll(\"a\", \"$`\")"], ["replaceAll by a function", "long.replaceAll(\"a\", x => long)"],
  ])("makes no endless text: %s", (_, source) => {
    expect(() => value(source)).toThrow(/would make a text of .* letters; at most 1000000 are made/);
  });

  it("says what to do about what overruns the stack", () => {
    expect(() => value("max(...big)")).toThrow("hand over the list itself, without `...`");
    expect(() => value("[1].concat(...big)")).toThrow("hand over the list itself");
    expect(() => value("(f => f(f))(f => f(f))")).toThrow("calls itself without end");
    expect(() => value("range(1, 100000).reduce((f, x) => () => f(), () => 1)()")).toThrow("calls itself without end");
    expect(() => value("range(1, 100000).reduce((a, b) => [a], []).flat(Infinity)")).toThrow(/nests too deeply|more than 10 million/);
  });
});
