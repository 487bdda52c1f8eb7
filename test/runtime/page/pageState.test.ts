import { describe, expect, it } from "vitest";
import type { CellReport, FromEngine } from "../../../runtime/engine/messages.ts";
import { hear, pageState, stateAfter } from "../../../runtime/page/pageState.ts";
import { pageTrees, summary } from "../../../runtime/page/pageTrees.ts";
import { renderStill } from "../../../runtime/page/still.ts";
import { stillCharts } from "../../../runtime/page/stillCharts.ts";
import { fakeNotebook, fakeText } from "./fakeNotebook.ts";

const messages = fakeNotebook().answer({ to: "text", version: 1, text: fakeText });
const context = { canEdit: true, still: false, pending: () => undefined, fault: () => null, asTable: () => false, fieldsOpen: () => false, pickedAt: () => undefined, canStop: () => false };
const cell = (given: Partial<CellReport>): FromEngine => ({ from: "cell", cell: { id: "a", name: "a", kind: "fit", line: 1, from: 0, to: 1, state: "current", message: null, at: null, notes: [], show: [], progress: null, fields: [], runs: 1, stopped: false, ...given } });

describe("hear", () => {
  it("keeps the last result in view while a cell is at work, and drops it when the cell fails", () => {
    const state = pageState();
    hear(state, cell({ show: [{ part: "text", text: "kept" }] }));
    hear(state, cell({ state: "working", show: null, fields: null }));
    expect(state.cells.get("a")?.show).toEqual([{ part: "text", text: "kept" }]);
    hear(state, cell({ state: "failed", message: "no", show: null }));
    expect(state.cells.get("a")?.show).toBeNull();
  });

  it("forgets what a new text no longer has, and keeps nodes that are not sent again", () => {
    const state = stateAfter(messages);
    const outline = messages.find((message) => message.from === "outline");
    if (outline?.from !== "outline") throw new Error("no outline");
    const prose = state.nodes.size;
    hear(state, { ...outline, version: 2, blocks: outline.blocks.filter((block) => block.block === "prose").map((block) => block.block === "prose" ? { ...block, node: undefined } : block) });
    expect(state.nodes.size).toBe(prose);
    expect(state.cells.size).toBe(0);
    expect(state.settled).toBe(false);
  });
});

describe("pageTrees", () => {
  it("gives the very same tree for every block that did not change", () => {
    const state = stateAfter(messages);
    const trees = pageTrees();
    const before = trees.blocks(state, context);
    const airline = state.cells.get("airline");
    if (!airline) throw new Error("no airline");
    state.cells.set("airline", { ...airline, runs: 2 });
    const after = trees.blocks(state, context);
    expect(after.length).toBe(before.length);
    expect(after.filter((tree, i) => tree !== before[i]).map((tree) => tree.attributes.id)).toEqual(["cell-airline"]);
  });

  it("leaves a cell that may wait as it was drawn, and draws it when it may no longer", () => {
    const state = stateAfter(messages);
    const trees = pageTrees();
    const before = trees.blocks(state, context);
    const airline = state.cells.get("airline");
    if (!airline) throw new Error("no airline");
    state.cells.set("airline", { ...airline, state: "working" });
    const unlike = (after: readonly unknown[]): number => after.filter((tree, i) => tree !== before[i]).length;
    expect(unlike(trees.blocks(state, context, (cell) => cell.state === "working"))).toBe(0);
    expect(unlike(trees.blocks(state, context))).toBe(1);
    // One that was never drawn cannot wait.
    expect(pageTrees().blocks(state, context, () => true).length).toBe(before.length);
  });

  it("draws the fields of a cell only where they are unfolded", () => {
    const state = pageState();
    hear(state, { from: "outline", version: 1, title: "", blocks: [{ block: "cell", key: "c", from: 0, to: 1, cell: "a" }], problems: [], definitions: [] });
    hear(state, cell({ fields: [{ expression: "a.aicc", value: 12.5 }] }));
    const drawn = (open: boolean): string => JSON.stringify(pageTrees().blocks(state, { ...context, fieldsOpen: () => open }));
    expect(drawn(false)).toContain("fields of this cell");
    expect(drawn(false)).not.toContain("a.aicc");
    expect(drawn(true)).toContain("a.aicc");
  });

  it("draws a number anew when only it moved", () => {
    const state = stateAfter(messages);
    const trees = pageTrees();
    const before = trees.blocks(state, context);
    const [index, number] = [...state.numbers][0];
    state.numbers.set(index, { ...number, state: "moved", now: "-480.0" });
    expect(trees.blocks(state, context).filter((tree, i) => tree !== before[i]).length).toBe(1);
  });

  it("lists the contents of a long notebook with unlike anchors for like headings", () => {
    const text = "# T\n\n## A\n\n## A\n\n## B\n\n### C\n\n## D\n";
    const state = stateAfter(fakeNotebook().answer({ to: "text", version: 1, text }));
    const still = renderStill(state, new Map());
    expect(still).toContain('<a href="#part-a">A</a>'); expect(still).toContain('<a href="#part-a-1">A</a>'); expect(still).toContain('<li class="below"><a href="#part-c">C</a>');
    expect(still).toContain('<h2 id="part-a-1">');
  });

  it("gives no heading an id that something else answers to, and follows the author's own links to it", () => {
    const text = "# Live\n\n## Carried\n\n## Cell model\n\n[here](#carried), [there](#cell-model), [nowhere](#else)\n";
    const still = renderStill(stateAfter(fakeNotebook().answer({ to: "text", version: 1, text })), new Map());
    expect([...still.matchAll(/<h\d id="([^"]*)"/g)].map((match) => match[1])).toEqual(["part-live", "part-carried", "part-cell-model"]);
    expect([...still.matchAll(/<a href="([^"]*)"/g)].map((match) => match[1])).toEqual(["#part-carried", "#part-cell-model", "#else"]);
  });

  it("counts in one sentence what does not stand", () => {
    expect(summary(stateAfter(messages))).toBe("Up to date. 1 cell failed. 1 number has moved.");
  });
});

describe("renderStill", () => {
  it("prints prose, numbers, tables and charts without anything that needs a script", async () => {
    const state = stateAfter(messages);
    const still = renderStill(state, await stillCharts(state, 640));
    expect(still).toContain("<h1");
    expect(still.split("<svg").length - 1).toBe(3);
    expect(still).toContain("There is no cell or function named nothing.");
    expect(still.replaceAll('<input type="checkbox" disabled', "")).not.toMatch(/<(?:button|input|select|script|details class="menu")/);
    expect(still).toContain('moving-average order</span> <strong class="number">1</strong>');
    expect(still).toMatch(/role="img" aria-label="Crossings rise/);
    expect(still).not.toContain("undefined");
    expect(still).not.toContain("NaN");
  });
});
