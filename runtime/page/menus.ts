// The small menu of a chart or a table: its picture and its data, and nothing that leads out.

import { columnsTable, columnsBehind } from "./chartData.ts";
import { tableTree } from "./partTrees.ts";
import { h } from "./tree.ts";
import type { Tree } from "./tree.ts";
import type { ChartPart } from "../../cells/parts/part.ts";

export function chartMenu(key: string, asTable: boolean): Tree {
  const item = (act: string, words: string): Tree => h("button", { type: "button", "data-act": act, "data-key": key }, words);
  return h("details", { class: "menu" },
    h("summary", {}, "picture, data"),
    h("div", { class: "menu-items" },
      item("save-svg", "save the picture (SVG)"), item("save-png", "save the picture (PNG)"), item("save-csv", "save the data (CSV)"),
      item("as-table", asTable ? "hide the data" : "show the data as a table")));
}

export function tableMenu(key: string): Tree {
  return h("p", { class: "table-menu" }, h("button", { type: "button", class: "quiet", "data-act": "save-csv", "data-key": key }, "save these data (CSV)"));
}

/** A chart's data as a table, with the times written as dates. */
export function chartDataTable(part: ChartPart): Tree {
  const { columns, rows } = columnsTable(columnsBehind(part));
  return h("div", { class: "chart-data" }, tableTree({ part: "table", title: `Data of “${part.title}”`, columns: columns.map((title) => ({ title })), rows }, null));
}
