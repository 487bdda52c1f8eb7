import { describe, expect, test } from "vitest";
import { createHelped, sendOut } from "../../../runtime/engine/helpers.ts";
import type { FromHelper, Helper, ToHelper } from "../../../runtime/engine/helpers.ts";
import { fake } from "./fakeLanguage.ts";

function fakeHelper() {
  const sent: ToHelper[] = [];
  let hear: (message: FromHelper | null) => void = () => undefined, ended = 0;
  const helper: Helper = { post: (message) => { sent.push(message); }, listen: (given) => { hear = given; }, end: () => { ended += 1; } };
  return { helper, sent, answer: (message: FromHelper | null) => hear(message), ended: () => ended };
}
const job = { task: "twice", shared: { by: 2 }, items: [1, 2, 3, 4].map((n) => ({ key: `k${n}`, n })) };

describe("work sent out to helpers", () => {
  test("goes out from the end, one item at a time, and what is there already is not asked for", () => {
    const here = new Set(["k3"]), put = new Map<string, unknown>(), a = fakeHelper(), b = fakeHelper();
    sendOut(job, [a.helper, b.helper], (key) => here.has(key), (key, value) => { put.set(key, value); });
    expect(a.sent).toEqual([{ to: "help", task: "twice", shared: { by: 2 }, item: { key: "k4", n: 4 } }]);
    expect(b.sent[0]).toMatchObject({ item: { key: "k2" }, shared: { by: 2 } });
    a.answer({ from: "helped", key: "k4", made: { value: 8 } });
    expect(a.sent[1]).toEqual({ to: "help", task: "twice", item: { key: "k1", n: 1 } });
    // What could not be made there is left to the run itself.
    b.answer({ from: "helped", key: "k2", made: null });
    expect(b.sent).toHaveLength(1);
    expect([...put]).toEqual([["k4", 8]]);
  });
  test("ends with the run, and a helper that breaks down is let go", () => {
    const a = fakeHelper(), b = fakeHelper();
    const end = sendOut(job, [a.helper, b.helper], () => false, () => undefined);
    b.answer(null);
    expect([a.ended(), b.ended()]).toEqual([0, 1]);
    end();
    expect(a.ended()).toBe(1);
    a.answer({ from: "helped", key: "k4", made: { value: 8 } });
    expect(a.sent).toHaveLength(1);
  });
  test("is made by a task of the language; a fault there is no answer", () => {
    const helped = createHelped({ ...fake, ahead: { twice: (({ by }: { by: number }) => ({ n }: { n: number }) => { if (n === 13) throw new RangeError("no"); return n * by; }) as never } });
    const ask = (n: number, shared?: unknown): FromHelper => helped({ to: "help", task: "twice", item: { key: `k${n}`, n } as never, ...(shared === undefined ? {} : { shared }) });
    expect(ask(4, { by: 2 })).toEqual({ from: "helped", key: "k4", made: { value: 8 } });
    expect(ask(5)).toEqual({ from: "helped", key: "k5", made: { value: 10 } });
    expect(ask(13)).toEqual({ from: "helped", key: "k13", made: null });
    expect(createHelped(fake)({ to: "help", task: "twice", shared: {}, item: { key: "k" } })).toEqual({ from: "helped", key: "k", made: null });
  });
});
