import { describe, expect, it } from "vitest";
import type { CellReport } from "../../../runtime/engine/messages.ts";
import { cellTree } from "../../../runtime/page/cell.ts";
import { html } from "../../../runtime/page/html.ts";
import { picked, pickedAt } from "../../../runtime/page/pick.ts";
import type { ChartPart } from "../../../cells/parts/part.ts";

const chart: ChartPart = {
  part: "chart", title: "Paths", alt: "Three paths.", height: 100, spec: {}, data: { all: { x: [1, 2] }, one: { x: [3] } },
  pick: { label: "Origin", at: 2, among: ["2019-01", "2019-02", "2019-03"].map((label, i) => ({ label, words: `From ${label}: ${i}.`, data: { one: { x: [i + 1] } } })) },
};
const drawn = (still: boolean, moved?: number): string => {
  const cell: CellReport = { id: "c", name: "c", kind: "compare", line: 1, from: 0, to: 9, state: "current", message: null, at: null, notes: [], show: [chart], progress: null, fields: null, runs: 1, stopped: false };
  return html(cellTree(cell, "c", { canEdit: false, still, pending: () => undefined, fault: () => null, asTable: () => false, fieldsOpen: () => false, pickedAt: () => moved, canStop: () => false }));
};

describe("a chart of which one view is picked", () => {
  it("is the cell's own at first, and the same object for the same view", () => {
    expect(picked(chart, undefined)).toBe(chart);
    expect(picked(chart, 0).data).toEqual({ all: { x: [1, 2] }, one: { x: [1] } });
    expect(picked(chart, 0)).toBe(picked(chart, 0));
    expect(picked(chart, 0).data.all).toBe(chart.data.all);
  });
  it("stays within the views that there are after a change", () => {
    expect([pickedAt(chart.pick!, 7), pickedAt(chart.pick!, -1), pickedAt(chart.pick!, undefined)]).toEqual([2, 0, 2]);
  });
  it("has a scale that pointer and keys move, and says what is shown", () => {
    const page = drawn(false, 1);
    expect(page).toContain('type="range"');
    expect(page).toContain('aria-valuetext="2019-02. From 2019-02: 1."');
    expect(page).toContain(">From 2019-02: 1.</p>");
    expect(page).toContain('for="pick-c/0">Origin</label>');
  });
  it("is printed with the words of the view that is drawn, and without the scale", () => {
    const page = drawn(true);
    expect(page).not.toContain("<input");
    expect(page).toContain(">From 2019-03: 2.</p>");
  });
});
