// The sample window: a range over a small picture of the series, with two handles and both dates as text.

import { h } from "./tree.ts";
import type { Tree } from "./tree.ts";
import type { ControlPart } from "../../cells/parts/part.ts";

export type WindowPart = Extract<ControlPart, { control: "window" }>;
export interface Span { readonly from: string; readonly to: string }

/** Index of the first period at or after `from` and of the last at or before `to` (a partial date covers its whole period). */
export function spanIndexes(times: readonly string[], span: Span): { readonly first: number; readonly last: number } {
  const first = times.findIndex((time) => !before(time, span.from) || time.startsWith(span.from));
  let last = times.length - 1;
  while (last > 0 && before(span.to, times[last]) && !times[last].startsWith(span.to)) last -= 1;
  return { first: first < 0 ? times.length - 1 : first, last };
}

/** Order of two times of one series: numbers where it is only numbered, else texts of one ISO form. */
function before(a: string, b: string): boolean {
  const numbers = /^-?\d+$/;
  return numbers.test(a) && numbers.test(b) ? Number(a) < Number(b) : a < b;
}

/** The period that a reader typed, as the series writes it; null where the series has none such. */
export function typedTime(times: readonly string[], typed: string, end: "from" | "to"): string | null {
  const text = typed.trim();
  if (text === "") return null;
  const exact = times.indexOf(text);
  if (exact >= 0) return times[exact];
  const within = times.filter((time) => time.startsWith(text));
  if (within.length === 0) return null;
  return end === "from" ? within[0] : within[within.length - 1];
}

/** Moves one end or the whole span by `steps` periods, within the series and with at least two periods left. */
export function moveSpan(times: readonly string[], span: Span, grip: "from" | "to" | "both", steps: number): Span {
  const { first, last } = spanIndexes(times, span);
  const end = times.length - 1;
  if (grip === "both") {
    const by = Math.max(-first, Math.min(end - last, steps));
    return { from: times[first + by], to: times[last + by] };
  }
  if (grip === "from") return { from: times[Math.max(0, Math.min(last - 1, first + steps))], to: times[last] };
  return { from: times[first], to: times[Math.max(first + 1, Math.min(end, last + steps))] };
}

/** @param id    of the first text field, for the label
 *  @param fault what is wrong with a typed date, or null */
export function windowTree(part: WindowPart, name: string, id: string, fault: string | null): Tree {
  const { times, at } = part;
  const { first, last } = spanIndexes(times, at);
  const most = Math.max(1, times.length - 1);
  const left = 100 * first / most; const right = 100 * last / most;
  const grip = (end: "from" | "to", index: number): Tree => h("div", {
    class: `grip grip-${end}`, role: "slider", tabindex: 0, "data-grip": end, "data-name": name, style: `left:${round(end === "from" ? left : right)}%`,
    "aria-label": end === "from" ? `${part.label}, first period` : `${part.label}, last period`,
    "aria-valuemin": 0, "aria-valuemax": times.length - 1, "aria-valuenow": index, "aria-valuetext": times[index],
  });
  const entry = (end: "from" | "to", index: number): Tree => h("input", {
    type: "text", class: "date", id: end === "from" ? id : `${id}-to`, size: Math.max(4, times[index].length), value: times[index], "data-act": `window-${end}`, "data-name": name,
    "aria-label": end === "from" ? `${part.label}, from` : `${part.label}, to`, "aria-invalid": fault ? "true" : null, spellcheck: "false", autocomplete: "off",
  });
  return h("div", { class: "window" },
    h("div", { class: "window-picture", "data-window": name },
      h("svg", { viewBox: "0 0 1000 100", preserveAspectRatio: "none", "aria-hidden": "true" }, h("path", { d: seriesPath(part.values), class: "window-line" })),
      h("div", { class: "window-off", style: `left:0;width:${round(left)}%` }), h("div", { class: "window-off", style: `left:${round(right)}%;right:0` }),
      h("div", { class: "window-range", "data-grip": "both", "data-name": name, style: `left:${round(left)}%;width:${round(right - left)}%` }),
      grip("from", first), grip("to", last)),
    h("div", { class: "window-dates" }, entry("from", first), h("span", { class: "to" }, " to "), entry("to", last), h("span", { class: "count" }, ` ${last - first + 1} of ${times.length} periods`)),
    fault ? h("p", { class: "fault", role: "status" }, fault) : null);
}

function round(value: number): number { return Math.round(value * 1000) / 1000; }

/** A line through the values on a 1000 by 100 field: at most 400 columns, each with its extremes; gaps break it. */
export function seriesPath(values: Float64Array): string {
  let low = Infinity; let high = -Infinity;
  for (const value of values) { if (value < low) low = value; if (value > high) high = value; }
  const span = high - low || 1;
  const x = (i: number): string => (1000 * i / Math.max(1, values.length - 1)).toFixed(1);
  const y = (value: number): string => (95 - 90 * (value - low) / span).toFixed(1);
  const each = Math.max(1, Math.ceil(values.length / 400));
  let path = ""; let pen = "M";
  for (let start = 0; start < values.length; start += each) {
    let least = -1; let most = -1;
    for (let i = start; i < Math.min(values.length, start + each); i++) {
      if (Number.isNaN(values[i])) continue;
      if (least < 0 || values[i] < values[least]) least = i;
      if (most < 0 || values[i] > values[most]) most = i;
    }
    if (least < 0) { pen = "M"; continue; }
    for (const i of least === most ? [least] : [Math.min(least, most), Math.max(least, most)]) { path += `${pen}${x(i)} ${y(values[i])}`; pen = "L"; }
  }
  return path;
}
