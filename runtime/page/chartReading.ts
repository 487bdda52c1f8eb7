// The points of a drawn chart in reading order: for the arrow keys and for the label beside the pointer.

import { timeFields, timeTexts } from "./chartData.ts";
import { printValue } from "./format.ts";
import type { ChartPart } from "../../cells/parts/part.ts";

/** Everything that is drawn at one place across, in one panel. Pixels count from the chart's own corner. */
export interface Reading { readonly panel: number; readonly x: number; readonly y: number; readonly lines: readonly { readonly label: string; readonly value: string }[] }

interface Item { readonly x?: number; readonly y?: number; readonly width?: number; readonly datum?: Record<string, unknown>; readonly items?: readonly Item[]; readonly marktype?: string; readonly role?: string; readonly name?: string }
export interface Drawn { scenegraph(): { readonly root: unknown }; origin(): readonly [number, number] }
interface Field { readonly label: string; readonly field: string; readonly format?: string }

/** Fields across and up, with the words for them, as the specification gives them. */
function fieldsOf(spec: unknown, across: Map<string, Field>, up: Map<string, Field>): void {
  if (Array.isArray(spec)) { for (const item of spec) fieldsOf(item, across, up); return; }
  if (typeof spec !== "object" || spec === null) return;
  const { encoding, layer, hconcat, vconcat, concat, spec: inner } = spec as Record<string, unknown>;
  if (typeof encoding === "object" && encoding !== null) {
    for (const [channel, definition] of Object.entries(encoding as Record<string, { field?: unknown; title?: unknown; axis?: { title?: unknown; format?: unknown } | null; format?: unknown }>)) {
      if (typeof definition?.field !== "string") continue;
      const title = [definition.title, definition.axis?.title].find((text) => typeof text === "string" && text !== "") as string | undefined;
      const made: Field = { label: title ?? definition.field, field: definition.field, ...(typeof definition.format === "string" ? { format: definition.format } : {}) };
      if (channel === "x") { if (!across.has(made.field)) across.set(made.field, made); }
      else if (["y", "y2", "color", "x2", "shape"].includes(channel) && !up.has(made.field)) up.set(made.field, made);
    }
  }
  for (const part of [layer, hconcat, vconcat, concat, inner]) fieldsOf(part, across, up);
}

/** @returns readings sorted by panel, then from left to right; at most one a pixel column */
export function readingsOf(view: Drawn, part: ChartPart): readonly Reading[] {
  const across = new Map<string, Field>(); const up = new Map<string, Field>();
  fieldsOf(part.spec, across, up);
  for (const field of across.keys()) up.delete(field);
  const repeated = new Set([...up.values()].map(({ label }) => label).filter((label, i, all) => all.indexOf(label) !== i));
  const found = new Map<string, { panel: number; x: number; y: number; data: Record<string, unknown>[] }>();
  const [left, top] = view.origin();
  let panel = 0;
  const walk = (item: Item, x: number, y: number, group: number): void => {
    const inner = item.items ?? [];
    if (item.marktype === "group") {
      for (const one of inner) {
        const own = item.role === "scope" || item.role === "cell" ? ++panel : group;
        for (const mark of one.items ?? []) walk(mark as Item, x + (one.x ?? 0), y + (one.y ?? 0), own);
      }
      return;
    }
    if (item.role !== "mark") return;
    for (const one of inner) {
      const datum = one.datum;
      if (!datum || !Number.isFinite(one.x) || ![...up.keys()].some((field) => typeof datum[field] === "number")) continue;
      const px = x + (one.x as number) + (item.marktype === "rect" ? (one.width ?? 0) / 2 : 0); const py = y + (one.y ?? 0);
      const key = `${group} ${px.toFixed(1)}`;
      const at = found.get(key);
      if (at) { if (!at.data.includes(datum)) at.data.push(datum); at.y = Math.min(at.y, py); } else found.set(key, { panel: group, x: px, y: py, data: [datum] });
    }
  };
  walk(view.scenegraph().root as Item, left, top, 0);
  const times = timeFields(part.spec);
  return [...found.values()].map(({ panel, x, y, data }) => ({ panel, x, y, lines: linesOf(data, across, up, times, repeated) }))
    .filter(({ lines }) => lines.length > 0).sort((a, b) => a.panel - b.panel || a.x - b.x);
}

function linesOf(data: readonly Record<string, unknown>[], across: ReadonlyMap<string, Field>, up: ReadonlyMap<string, Field>, times: ReadonlySet<string>, repeated: ReadonlySet<string>): Reading["lines"] {
  const lines = new Map<string, string>();
  for (const datum of data) {
    for (const [field, { label, format }] of [...across, ...up]) {
      const value = datum[field];
      if (value === undefined || value === null) continue;
      const words = repeated.has(label) ? field : label;
      if (lines.has(words)) continue;
      lines.set(words, times.has(field) ? timeWord(value) : printValue(value as number | string | boolean, format));
    }
  }
  return [...lines].map(([label, value]) => ({ label, value }));
}

function timeWord(value: unknown): string {
  const ms = value instanceof Date ? value.getTime() : Number(value);
  return timeTexts(new Float64Array([ms]))[0] ?? "–";
}
