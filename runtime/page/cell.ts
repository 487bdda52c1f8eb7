// One cell: its name and state in the margin, what it shows, what is wrong with it, and its fields.

import { controlTree } from "./controls.ts";
import { chartDataTable, chartMenu, tableMenu } from "./menus.ts";
import { picked, pickTree } from "./pick.ts";
import { fieldLink } from "./fieldLink.ts";
import { printValue } from "./format.ts";
import { claimsTree, equationTree, figuresTree, tableTree, textTree } from "./partTrees.ts";
import { h } from "./tree.ts";
import type { AttributeValue, Given, Tree } from "./tree.ts";
import type { CellReport } from "../engine/messages.ts";
import type { ChartPart, Part } from "../../cells/parts/part.ts";

/** Trees of parts by the part itself: a cell at work again shows what it showed, and need not be described anew. */
export type PartTrees = WeakMap<Part, { readonly inputs: readonly unknown[]; readonly tree: Given }>;

export interface CellContext {
  readonly canEdit: boolean;
  /** Printed once for a reader without JavaScript: no buttons, controls as words. */
  readonly still: boolean;
  readonly pending: (name: string) => unknown;
  readonly fault: (name: string) => string | null;
  /** Whether the chart's or table's data are shown as a table. */
  readonly asTable: (key: string) => boolean;
  /** Whether the cell's list of fields is unfolded: folded, it is not drawn at all. */
  readonly fieldsOpen: (id: string) => boolean;
  /** Where the reader moved a chart's pick; undefined where it stands as the cell has it. */
  readonly pickedAt: (key: string) => number | undefined;
  /** Whether stopping this cell should be offered. */
  readonly canStop: (id: string) => boolean;
}

/** The key by which a chart of a cell is known to whoever draws it. */
export function chartKey(cell: string, index: number): string { return `${cell}/${index}`; }

export function cellTree(cell: CellReport, key: string, context: CellContext, known: PartTrees = new WeakMap()): Tree {
  const source = context.canEdit ? { "data-act": "source", "data-from": cell.from, "data-to": cell.to } : {};
  const label = cell.name ?? cell.kind;
  return h("section", { class: "cell", id: cell.name ? `cell-${cell.name}` : null, key, "data-block": cell.id, "data-from": context.still ? cell.from : null, "data-state": cell.state, "data-kind": cell.kind, "aria-label": cell.name ? `${cell.kind} ${cell.name}` : cell.kind, "aria-busy": cell.state === "working" ? "true" : null },
    h("div", { class: "cell-margin" },
      context.canEdit ? h("button", { type: "button", class: "cell-name", ...source, "aria-label": `${label}: go to its source` }, label) : h("span", { class: "cell-name" }, label),
      cell.name ? h("span", { class: "cell-kind" }, cell.kind) : null,
      h("span", { class: "cell-state" }, h("span", { class: "shape", "aria-hidden": "true" }), cell.state)),
    h("div", { class: "cell-body" },
      faultTree(cell, context), progressTree(cell, context),
      partsOf(cell, false).map(([part, index]) => keptPart(part, index, cell, context, source, known)),
      detailsTree(partsOf(cell, true), (part, index) => keptPart(part, index, cell, context, source, known)),
      cell.notes.length > 0 ? h("ul", { class: "cell-notes" }, cell.notes.map((note) => h("li", {}, note))) : null,
      fieldsTree(cell, context)));
}

/** Parts with their places among all of the cell's: charts are known by them. */
function partsOf(cell: CellReport, detail: boolean): readonly (readonly [Part, number])[] {
  return (cell.show ?? []).map((part, index) => [part, index] as const).filter(([part]) => (part.detail === true) === detail);
}

/** Folded, and named by what is inside. Charts in it are drawn when it is opened; paper shows it whole. */
function detailsTree(parts: readonly (readonly [Part, number])[], tree: (part: Part, index: number) => Given): Given {
  if (parts.length === 0) return null;
  const titles = parts.flatMap(([part]) => ("title" in part && part.title ? [part.title] : []));
  const named = titles.map((title) => (/^[A-Z][a-z]/.test(title) ? title[0].toLowerCase() + title.slice(1) : title)).slice(0, 4);
  return h("details", { class: "more", key: "more" },
    h("summary", {}, named.length === 0 ? "more" : `more: ${named.join("; ")}${titles.length > named.length ? "; …" : ""}`),
    parts.map(([part, index]) => tree(part, index)));
}

function faultTree(cell: CellReport, context: CellContext): Given {
  if (!cell.message) return null;
  const goOn = cell.stopped && !context.still ? h("button", { type: "button", class: "quiet", "data-act": "go-on", "data-cell": cell.id }, "go on") : null;
  if (cell.state !== "failed" && cell.state !== "blocked") return h("p", { class: "cell-remark" }, cell.message, goOn);
  const line = cell.at?.line ?? cell.line;
  const place = cell.at ?? cell;
  return h("div", { class: `cell-fault ${cell.state}` },
    h("p", {}, h("span", { class: "fault-word" }, cell.state === "failed" ? "Failed" : "Blocked"), ` ${cell.message}`, goOn),
    context.canEdit
      ? h("button", { type: "button", class: "quiet", "data-act": "source", "data-from": place.from, "data-to": place.to }, `go to line ${line}`)
      : h("span", { class: "fault-line" }, `line ${line} of the notebook`));
}

function progressTree(cell: CellReport, context: CellContext): Given {
  if (cell.state !== "working") return null;
  const { progress } = cell;
  const stop = context.canStop(cell.id) ? h("button", { type: "button", class: "quiet stop", "data-act": "stop", "data-cell": cell.id }, "stop this cell") : null;
  if (!progress) return stop ? h("p", { class: "cell-progress" }, "still at work ", stop) : null;
  const count = progress.total > 0 ? `${printValue(progress.done)} of ${printValue(progress.total)}` : printValue(progress.done);
  const left = progress.leftMs === null ? "" : `, ${timeLeft(progress.leftMs)}`;
  return h("p", { class: "cell-progress" },
    h("progress", { max: progress.total > 0 ? progress.total : null, value: progress.total > 0 ? progress.done : null, "aria-label": `progress of ${cell.name ?? cell.kind}` }),
    h("span", { class: "number" }, ` ${count}${progress.what ? ` ${progress.what}` : ""}${left} `), stop);
}

/** Rounded so that it does not flicker: an estimate is no clock. */
function timeLeft(ms: number): string {
  const seconds = ms / 1000;
  if (seconds < 1.5) return "nearly done";
  if (seconds < 10) return `about ${Math.round(seconds)} s left`;
  if (seconds < 55) return `about ${5 * Math.round(seconds / 5)} s left`;
  if (seconds < 5400) return `about ${Math.max(1, Math.round(seconds / 60))} min left`;
  return `about ${Math.round(seconds / 3600)} h left`;
}

function keptPart(part: Part, index: number, cell: CellReport, context: CellContext, source: Readonly<Record<string, AttributeValue>>, known: PartTrees): Given {
  const name = cell.name ?? "";
  const inputs = [index, cell.id, cell.show, cell.from, cell.to, context.canEdit, context.still, context.pending(name), context.fault(name), context.asTable(chartKey(cell.id, index)), context.pickedAt(chartKey(cell.id, index))];
  const old = known.get(part);
  if (old?.inputs.every((input, i) => input === inputs[i])) return old.tree;
  const tree = partTree(part, index, cell, context, source);
  known.set(part, { inputs, tree });
  return tree;
}

function partTree(part: Part, index: number, cell: CellReport, context: CellContext, source: Readonly<Record<string, AttributeValue>>): Given {
  const key = chartKey(cell.id, index);
  switch (part.part) {
    // The sentence that states the finding is shown below its chart, unless the cell says it as a text anyway.
    case "chart": return chartTree(part, key, context, source, !(cell.show ?? []).some((other) => other.part === "text" && other.text.includes(part.alt)));
    case "table": return h("div", { class: "outlet", ...source }, tableTree(part, context.still ? null : tableMenu(key)));
    case "equation": return h("div", { class: "outlet", ...source }, equationTree(part));
    case "text": return textTree(part);
    case "claims": return claimsTree(part);
    case "figures": return h("div", { class: "outlet", ...source }, figuresTree(part));
    case "control": return context.still ? stillControl(part) : controlTree(part, { name: cell.name ?? cell.id, where: "place", canEdit: context.canEdit, pending: context.pending(cell.name ?? ""), fault: context.fault(cell.name ?? "") });
  }
}

function chartTree(part: ChartPart, key: string, context: CellContext, source: Readonly<Record<string, AttributeValue>>, says: boolean): Tree {
  const box = context.still
    ? { class: "chart-box", own: key, role: "img", "aria-label": part.alt }
    : { class: "chart-box", own: key, role: "application", "aria-roledescription": "chart", tabindex: 0, "aria-label": `${part.title}. ${part.alt} The arrow keys read its points.`, "data-chart": key, style: `min-height:${part.height}px` };
  // Its place is kept while it is out of sight and the browser spares itself its layout.
  return h("figure", { class: "part part-chart", key: `chart ${key}`, style: context.still ? null : `contain-intrinsic-height:auto ${part.height + 70}px` },
    h("figcaption", {}, h("span", { class: "chart-title" }, part.title), context.still ? null : chartMenu(key, context.asTable(key))),
    h("div", { class: "outlet", ...source }, h("div", box)),
    part.pick ? context.still ? h("p", { class: "pick-words" }, part.pick.among[part.pick.at].words) : pickTree(part.pick, key, context.pickedAt(key)) : null,
    says ? h("p", { class: "chart-alt", "aria-hidden": "true" }, part.alt) : null,
    context.asTable(key) ? chartDataTable(picked(part, context.pickedAt(key))) : null);
}

function stillControl(part: Extract<Part, { part: "control" }>): Tree {
  const at = typeof part.at === "object" ? `${part.at.from} to ${part.at.to}` : typeof part.at === "boolean" ? (part.at ? "on" : "off") : printValue(part.at);
  return h("p", { class: "control still" }, h("span", { class: "label" }, part.label), " ", h("strong", { class: "number" }, at));
}

function fieldsTree(cell: CellReport, context: CellContext): Given {
  if (context.still || !cell.fields || cell.fields.length === 0 || cell.state === "failed" || cell.state === "blocked") return null;
  return h("details", { class: "fields", "data-fields": cell.id },
    h("summary", {}, "fields of this cell"),
    context.fieldsOpen(cell.id) && h("ul", {}, cell.fields.map(({ expression, value }) => {
      const link = fieldLink(expression, value);
      return h("li", {}, h("code", {}, link), h("button", { type: "button", class: "quiet", "data-act": "copy", "data-text": link, "aria-label": `copy ${expression}` }, "copy"));
    })));
}
