// Tables, figures, claims, equations and remarks as described elements.

import { printValue } from "./format.ts";
import { h } from "./tree.ts";
import type { Given, Tree } from "./tree.ts";
import { mathTree } from "./math.ts";
import type { ClaimsPart, EquationPart, FiguresPart, TablePart, TextPart } from "../../cells/parts/part.ts";

/** Rows drawn at most: a longer table is cut, says so, and its CSV has all. */
const mostRows = 300;

export function tableTree(part: TablePart, menu: Given): Tree {
  const right = part.columns.map((column, i) => (column.align ?? (part.rows.some((row) => typeof row[i] === "number") ? "right" : "left")) === "right");
  const marked = new Map((part.marked ?? []).map(({ row, word }) => [row, word]));
  const shown = part.rows.slice(0, mostRows);
  return h("div", { class: "part part-table", style: `contain-intrinsic-height:auto ${Math.min(640, 60 + 29 * shown.length)}px` },
    h("div", { class: "table-box", tabindex: 0, role: "group", "aria-label": part.title ?? "table" },
      h("table", { class: "figures-table" },
        part.title ? h("caption", {}, part.title) : null,
        h("thead", {}, h("tr", {}, part.columns.map((column, i) => h("th", { scope: "col", class: right[i] ? "to-right" : null }, column.title, column.unit ? h("span", { class: "unit" }, ` (${column.unit})`) : null)))),
        h("tbody", {}, shown.map((row, r) => h("tr", { class: marked.has(r) ? "marked" : null }, row.map((value, i) =>
          h("td", { class: right[i] ? "number" : isTime(value) ? "time" : null }, printValue(value, part.columns[i]?.format), i === 0 && marked.has(r) ? h("span", { class: "mark-word" }, marked.get(r)) : null))))))),
    part.rows.length > mostRows ? h("p", { class: "note" }, `${mostRows} of ${printValue(part.rows.length)} rows are shown; the data (CSV) have all.`) : null,
    part.note ? h("p", { class: "note" }, part.note) : null,
    menu);
}

/** "2025-03", "2025-W07", "2025, total": a time is never broken at its hyphens. Spans may break between their ends. */
const isTime = (value: unknown): boolean => typeof value === "string" && value.length <= 24 && /^[+-]?\d{4,6}(-[\dWQ]\S*)?(,? [a-z]+)?$/.test(value);

export function figuresTree(part: FiguresPart): Tree {
  return h("dl", { class: "part part-figures" }, part.figures.map(({ label, value, format, unit }) =>
    h("div", {}, h("dt", {}, label), h("dd", { class: "number" }, printValue(value, format), unit ? h("span", { class: "unit" }, ` ${unit}`) : null))));
}

export function claimsTree(part: ClaimsPart): Tree {
  const word = (holds: boolean | null): string => holds === null ? "undecided" : holds ? "holds" : "broken";
  return h("ul", { class: "part part-claims" }, part.claims.map(({ claim, holds, message }) =>
    h("li", { class: `claim ${word(holds)}` }, h("span", { class: "claim-state" }, h("span", { class: "shape", "aria-hidden": "true" }), word(holds)),
      h("span", { class: "claim-words" }, claim, message ? h("span", { class: "claim-why" }, message) : null))));
}

export function equationTree(part: EquationPart): Tree {
  const math = mathTree(part.tex, true);
  return h("div", { class: "part part-equation" },
    part.title ? h("p", { class: "part-title" }, part.title) : null,
    h("div", { class: "equation", style: `--signs:${longestLine(part.tex)}`, tabindex: 0, role: "group", "aria-label": part.title ?? "equation" }, math.tag === "math" ? { ...math, attributes: { ...math.attributes, "aria-label": part.text } } : h("code", {}, part.text)));
}

/** Signs in the longest line of an equation, commands counting as one: what its width on paper hangs on. */
const longestLine = (tex: string): number => Math.max(1, ...tex.split("\\\\").map((line) => line.replace(/\\[a-zA-Z]+/g, "x").replace(/[{}_^&\s]/g, "").length));

export function textTree(part: TextPart): Tree {
  const tone = part.tone ?? "plain";
  return h("p", { class: `part part-text tone-${tone}` }, tone === "caution" ? h("span", { class: "tone-word" }, "Caution. ") : null, part.text);
}
