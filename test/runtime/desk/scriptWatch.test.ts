import { beforeEach, describe, expect, it } from "vitest";
import { ScriptWatch, silenceMs } from "../../../runtime/desk/scriptWatch.ts";
import type { CellState } from "../../../runtime/engine/messages.ts";
import type { CellNote, ToPage } from "../../../runtime/page/protocol.ts";

// A browser's storage outlives its tabs: each test ends a tab in some way, and opens the notebook again.

const kept = new Map<string, string>();
let clock = 0, asked: ToPage[] = [], said: boolean[] = [];
beforeEach(() => { kept.clear(); clock = 0; asked = []; said = []; });

function opened(tab: string, openTabs: readonly string[] = [], notebook = "/n.md"): ScriptWatch {
  const watch = new ScriptWatch({
    notebook, tab, post: (message) => asked.push(message), now: () => clock, silent: (silent) => said.push(silent),
    storage: {
      getItem: (key) => kept.get(key) ?? null, setItem: (key, value) => { kept.set(key, value); }, removeItem: (key) => { kept.delete(key); },
      key: (index) => [...kept.keys()][index] ?? null, get length() { return kept.size; },
    },
  });
  watch.start((other) => openTabs.includes(other));
  return watch;
}

const note = (id: string, kind: string, state: CellState): CellNote => ({ id, name: id, kind, line: 1, from: 0, to: 1, state, message: null, at: null });
const hears = (watch: ScriptWatch, all: boolean, ...cells: readonly CellNote[]): void => watch.hear({ page: "states", version: 1, all, cells, numbers: [] });

describe("scripts at work", () => {
  it("wait where the tab ended under them, in this tab and in another", () => {
    hears(opened("one"), true, note("s", "script", "working"));
    expect(opened("one").held).toBe(true);
    expect(opened("two").held).toBe(true);
  });

  it("run at once where they had ended, were no scripts, or the reader left a page that was well", () => {
    const ended = opened("one");
    hears(ended, true, note("s", "script", "working"));
    hears(ended, false, note("s", "script", "current"));
    expect(opened("one").held).toBe(false);
    hears(opened("one"), true, note("f", "fit", "working"));
    expect(opened("one").held).toBe(false);
    const left = opened("one");
    hears(left, true, note("s", "script", "working"));
    left.leave();
    expect(opened("one").held).toBe(false);
  });

  it("run at once where they are at work in a tab that is still open, or in another notebook", () => {
    hears(opened("one"), true, note("s", "script", "working"));
    expect(opened("two", ["one"]).held).toBe(false);
    expect(opened("two", [], "/n.md two").held).toBe(false);
  });

  it("wait at each opening until the reader runs them to their end", () => {
    hears(opened("one"), true, note("s", "script", "working"));
    const again = opened("one");
    hears(again, true, note("s", "script", "failed"));
    again.leave();
    const third = opened("one");
    expect(third.held).toBe(true);
    third.run();
    hears(third, false, note("s", "script", "working"));
    expect(opened("one").held).toBe(true);
    hears(third, false, note("s", "script", "current"));
    expect(opened("one").held).toBe(false);
  });

  it("are forgotten with their cells", () => {
    const watch = opened("one");
    hears(watch, true, note("s", "script", "working"), note("r", "script", "working"));
    hears(watch, true, note("r", "script", "working"));
    hears(watch, false, note("r", "script", "failed"));
    expect(opened("one").held).toBe(false);
  });
});

describe("a page whose scripts are at work", () => {
  it("is asked whether it lives, one question at a time; others are not", () => {
    const watch = opened("one");
    watch.beat();
    expect(asked).toEqual([]);
    hears(watch, true, note("s", "script", "working"));
    watch.beat(); watch.beat();
    expect(asked).toEqual([{ to: "alive" }]);
    watch.hear({ page: "alive" });
    watch.beat();
    expect(asked).toHaveLength(2);
  });

  it("is said to be silent after a while, once, and to be back when it answers", () => {
    const watch = opened("one");
    hears(watch, true, note("s", "script", "working"));
    watch.beat();
    for (clock = 1000; clock <= silenceMs; clock += 1000) watch.beat();
    expect(said).toEqual([]);
    for (; clock <= silenceMs + 3000; clock += 1000) watch.beat();
    expect(said).toEqual([true]);
    watch.hear({ page: "alive" });
    expect(said).toEqual([true, false]);
  });

  it("finds its scripts waiting when the reader leaves it silent, or has it opened again", () => {
    const left = opened("one");
    hears(left, true, note("s", "script", "working"));
    left.beat();
    clock = silenceMs + 1;
    left.beat();
    left.leave();
    expect(opened("one").held).toBe(true);
    left.hold();
    expect(left.held).toBe(true);
    expect(said).toEqual([true, false]);
  });
});
