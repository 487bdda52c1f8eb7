import { afterEach, beforeEach, describe, expect, it, vi } from "vitest";
import type { CellReport, FromEngine, NumberReport } from "../../../runtime/engine/messages.ts";
import { hear, pageState } from "../../../runtime/page/pageState.ts";
import type { FromPage } from "../../../runtime/page/protocol.ts";
import { statesPost } from "../../../runtime/page/statesPost.ts";

beforeEach(() => { vi.useFakeTimers(); });
afterEach(() => { vi.useRealTimers(); });

const cell: CellReport = { id: "a", name: "a", kind: "fit", line: 1, from: 0, to: 1, state: "current", message: null, at: null, notes: [], show: [], progress: null, fields: [], runs: 1, stopped: false };
const number: NumberReport = { index: 0, line: 1, from: 2, to: 3, expression: "a", saved: "1", now: "1", value: 1, state: "agrees", message: null };
const outline: FromEngine = { from: "outline", version: 1, title: "", problems: [], definitions: [], blocks: [{ block: "cell", key: "c", from: 0, to: 1, cell: "a" }, { block: "prose", key: "p", from: 2, to: 9, numbers: [0, 1] }] };

/** What is told of cells and numbers after each group of messages. */
function told(...groups: readonly (readonly FromEngine[])[]): readonly (readonly string[])[] {
  const state = pageState(), posted: FromPage[] = [], post = statesPost(state, (message) => posted.push(message));
  return groups.map((group) => {
    posted.length = 0;
    for (const message of group) { hear(state, message); post.note(message); }
    vi.advanceTimersByTime(100);
    return posted.flatMap((message) => message.page === "states" ? [...(message.all ? ["all"] : []), ...message.cells.map((each) => `${each.id} ${each.state}`), ...message.numbers.map((each) => `${each.index} ${each.state}`)] : []);
  });
}

describe("statesPost", () => {
  it("tells nothing of a cell that ran and stands as it stood", () => {
    expect(told([outline, { from: "cell", cell }], [{ from: "cell", cell: { ...cell, state: "working" } }, { from: "cell", cell: { ...cell, runs: 2 } }], [{ from: "cell", cell: { ...cell, state: "failed", message: "no" } }]))
      .toEqual([["all", "a current"], [], ["a failed"]]);
  });

  it("tells of a live number that it is undecided, and when it no longer is", () => {
    const undecided: NumberReport = { ...number, index: 1, state: "undecided", now: null, value: null, message: "missing" };
    expect(told([outline, { from: "number", number }, { from: "number", number: undecided }], [{ from: "number", number: { ...number, state: "moved" } }], [{ from: "number", number: { ...undecided, state: "agrees" } }]))
      .toEqual([["all", "1 undecided"], [], ["1 agrees"]]);
  });

  it("tells all afresh of a new text", () => {
    expect(told([outline, { from: "cell", cell }], [{ ...outline, version: 2 }])).toEqual([["all", "a current"], ["all", "a current"]]);
  });
});
