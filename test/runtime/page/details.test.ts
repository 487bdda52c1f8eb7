import { describe, expect, it } from "vitest";
import { details } from "../../../cells/parts/part.ts";
import type { Part } from "../../../cells/parts/part.ts";
import type { CellReport } from "../../../runtime/engine/messages.ts";
import { cellTree } from "../../../runtime/page/cell.ts";
import { html } from "../../../runtime/page/html.ts";

// What a cell folds away: there for whoever asks, with JavaScript and without.

const table = (title: string): Part => ({ part: "table", title, columns: [{ title: "a" }], rows: [[1]] });
const cell = (show: readonly Part[]): CellReport => ({ id: "c", name: "c", kind: "fit", line: 1, from: 0, to: 9, state: "current", message: null, at: null, notes: [], show, progress: null, fields: null, runs: 1, stopped: false });
const drawn = (show: readonly Part[], still = true): string => html(cellTree(cell(show), "c", { canEdit: false, still, pending: () => undefined, fault: () => null, asTable: () => false, fieldsOpen: () => false, pickedAt: () => undefined, canStop: () => false }));

describe("details of a cell", () => {
  it("stand folded below what carries the finding, named by their titles, and are whole in a still page", () => {
    const text = drawn([...details([table("Test by test")]), { part: "text", text: "The finding." }, ...details([table("What differencing would change")])]);
    expect(text).toMatch(/The finding\..*<details class="more"><summary>more: test by test; what differencing would change<\/summary>.*Test by test.*What differencing would change.*<\/details>/s);
  });

  it("leave no mark where there are none", () => {
    expect(drawn([{ part: "text", text: "The finding." }])).not.toContain("<details");
  });
});
