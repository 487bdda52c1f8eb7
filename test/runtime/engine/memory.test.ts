import { describe, expect, test } from "vitest";
import { createMemory } from "../../../runtime/engine/memory.ts";
import { createTimeLeft } from "../../../runtime/engine/timeLeft.ts";

describe("a cell's memory", () => {
  test("gives what was made under a key, and makes what throws again", () => {
    const memory = createMemory();
    let made = 0;
    expect([memory.recall("a", () => ++made), memory.recall("a", () => ++made)]).toEqual([1, 1]);
    expect(() => memory.recall("b", () => { throw new RangeError("no"); })).toThrow("no");
    expect(memory.recall("b", () => 7)).toBe(7);
  });
  test("keeps what one of the last six runs used, and forgets the rest", () => {
    const memory = createMemory();
    let made = 0;
    const use = (key: string) => memory.recall(key, () => ++made);
    for (let run = 0; run < 20; run++) { use("always"); if (run === 0) use("once"); memory.ended(); }
    use("always");
    expect(made).toBe(2);
    use("once");
    expect(made).toBe(3);
  });
});

describe("time left", () => {
  const left = () => { let now = 0; const timeLeft = createTimeLeft(() => now); return (at: number, done: number, total = 100) => { now = at; return timeLeft(done, total); }; };
  test("follows the pace: 10 a second, 60 to go, are six seconds", () => {
    const at = left();
    for (let done = 1; done < 40; done++) at(100 * done, done);
    expect(at(4000, 40)).toBeCloseTo(6000, -1);
  });
  test("what was remembered at once does not flatter the pace", () => {
    const at = left();
    for (let done = 1; done <= 50; done++) at(1, done);
    for (let done = 51; done < 60; done++) at(1000 * (done - 50), done);
    expect(at(10_000, 60)).toBeCloseTo(40_000, -1);
  });
  test("follows work that grows heavier", () => {
    const at = left();
    for (let done = 1; done <= 50; done++) at(10 * done, done);
    for (let done = 51; done <= 95; done++) at(500 + 1000 * (done - 50), done);
    expect(at(45_500, 95)).toBeCloseTo(5000, -2);
  });
  test("is not told before there is a pace, nor without a total", () => {
    const at = left();
    expect([at(0, 0), at(100, 1), at(300, 2), at(400, 3)]).toEqual([null, null, null, null]);
    expect(at(5000, 20, 0)).toBeNull();
  });
});
