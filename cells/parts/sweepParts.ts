// What a sweep shows: how far each number moves over the control's values, drawn with the present value marked.

import { details } from "./part.ts";
import type { ChartPart, Part, TablePart } from "./part.ts";
import { count, figure, listOf, someOf } from "./words.ts";

interface Swept {
  readonly over: string; readonly at: unknown; readonly measures: readonly string[]; readonly asked: number;
  readonly rows: readonly { readonly value: unknown; readonly present: boolean; readonly failed: string | null; readonly [measure: string]: unknown }[];
}

export function sweepParts(sweep: Swept): readonly Part[] {
  const failed = sweep.rows.filter(row => row.failed !== null);
  return [
    ...sweep.measures.map((measure): Part => ({ part: "text", text: sentence(sweep, measure) })),
    ...(sweep.rows.length < sweep.asked ? [{ part: "text" as const, tone: "caution" as const, text: `Stopped early: ${sweep.rows.length} of ${sweep.asked} values of ${sweep.over} were tried.` }] : []),
    ...(failed.length === 0 ? [] : [{ part: "text" as const, tone: "caution" as const, text: `${count(failed.length, "value")} of ${sweep.over} gave no result (${someOf(failed.map(row => printed(row.value)))}); the first said: ${failed[0].failed}` }]),
    ...sweep.measures.flatMap(measure => chartOf(sweep, measure)),
    ...details([tableOf(sweep)]),
  ];
}

function sentence(sweep: Swept, measure: string): string {
  const name = measure === "measure" ? "the measure" : measure;
  const given = sweep.rows.filter(row => row.failed === null);
  const values = given.map(row => row[measure]);
  const now = given.find(row => row.present)?.[measure];
  const nowText = now === undefined ? "" : ` At the present ${sweep.over}, ${printed(sweep.at)}, it is ${shown(now)}.`;
  if (values.length === 0) return `No value of ${sweep.over} gave ${name}.`;
  if (values.every(value => typeof value === "number")) {
    const numbers = given.filter(row => Number.isFinite(row[measure] as number));
    if (numbers.length === 0) return `For no value of ${sweep.over} is ${name} a number.`;
    const low = numbers.reduce((a, b) => (b[measure] as number) < (a[measure] as number) ? b : a);
    const high = numbers.reduce((a, b) => (b[measure] as number) > (a[measure] as number) ? b : a);
    if (low[measure] === high[measure]) return `Over ${count(numbers.length, "value")} of ${sweep.over}, ${name} stays at ${shown(low[measure])}: it does not hang on this choice.`;
    return `Over ${count(numbers.length, "value")} of ${sweep.over}, ${name} runs from ${shown(low[measure])} (at ${printed(low.value)}) to ${shown(high[measure])} (at ${printed(high.value)}).${nowText}`;
  }
  const kinds = Array.from(new Set(values.map(shown)));
  if (kinds.length === 1) return `${name} is ${kinds[0]} for each of ${count(values.length, "value")} of ${sweep.over}: it does not hang on this choice.`;
  const parts = kinds.map(kind => `${kind} at ${someOf(given.filter(row => shown(row[measure]) === kind).map(row => printed(row.value)))}`);
  return `${name} hangs on ${sweep.over}: ${listOf(parts)}.${nowText}`;
}

function chartOf(sweep: Swept, measure: string): readonly ChartPart[] {
  const rows = sweep.rows.filter(row => row.failed === null);
  const numeric = rows.every(row => typeof row[measure] === "number");
  const across = sweep.rows.every(row => typeof row.value === "number") ? "quantitative" : "ordinal";
  const x = across === "quantitative"
    ? { field: "value", type: "quantitative", title: sweep.over, scale: { zero: false, nice: false, padding: 12 }, axis: { grid: false, tickMinStep: 1e-9 } }
    : { field: "value", type: "ordinal", sort: null, title: sweep.over, axis: { labelAngle: 0, labelOverlap: true } };
  const name = measure === "measure" ? "measure" : measure;
  const y = numeric
    ? { field: "result", type: "quantitative", title: name, scale: { zero: false } }
    : { field: "result", type: "ordinal", sort: null, title: name };
  const columns = {
    value: rows.map(row => across === "quantitative" ? row.value as number : printed(row.value)),
    result: rows.map(row => numeric ? row[measure] as number : shown(row[measure])),
    present: rows.map(row => row.present),
  };
  const kept = numeric ? columns.result.map((value, i) => Number.isFinite(value as number) ? i : -1).filter(i => i >= 0) : rows.map((_, i) => i);
  const pick = <T>(list: readonly T[]): readonly T[] => kept.map(i => list[i]);
  return [{
    part: "chart", title: `${name} for each value of ${sweep.over}`, alt: sentence(sweep, measure), height: 220,
    spec: {
      data: { name: "rows" },
      layer: [
        // All values first: the order of the axis is that of the first layer that names them.
        { mark: { type: "point", opacity: 0, tooltip: false }, encoding: { x, y } },
        { transform: [{ filter: { field: "present", equal: true } }], mark: { type: "rule", style: "limit" }, encoding: { x } },
        ...(numeric && across === "quantitative" ? [{ mark: { type: "line", style: "model" }, encoding: { x, y } }] : []),
        { transform: [{ filter: { field: "present", equal: false } }], mark: { type: "point", style: "mark", filled: true, size: 50, opacity: 1 }, encoding: { x, y, tooltip: tooltip(sweep.over, name) } },
        { transform: [{ filter: { field: "present", equal: true } }], mark: { type: "point", style: "outside", shape: "diamond", filled: true, size: 120, opacity: 1 }, encoding: { x, y, tooltip: tooltip(sweep.over, name) } },
      ],
    },
    data: { rows: { value: pick(columns.value), result: pick(columns.result), present: pick(columns.present) } },
  }];
}

function tooltip(over: string, name: string): readonly Record<string, unknown>[] {
  return [{ field: "value", title: over }, { field: "result", title: name }];
}

function tableOf(sweep: Swept): TablePart {
  const remarks = sweep.rows.some(row => row.failed !== null);
  return {
    part: "table", title: `Recomputed for each value of ${sweep.over}`,
    columns: [
      { title: sweep.over }, ...sweep.measures.map(measure => ({ title: measure, align: "right" as const, format: ",.5~r" })),
      ...(remarks ? [{ title: "remark" }] : []),
    ],
    rows: sweep.rows.map(row => [
      cell(row.value), ...sweep.measures.map(measure => row.failed === null ? cell(row[measure]) : null), ...(remarks ? [row.failed ?? ""] : []),
    ]),
    marked: sweep.rows.flatMap((row, i) => row.present ? [{ row: i, word: "present setting" }] : []),
  };
}

function cell(value: unknown): number | string | boolean {
  return typeof value === "number" || typeof value === "boolean" ? value : printed(value);
}

function shown(value: unknown): string {
  if (typeof value === "number") return figure(value, 4);
  if (typeof value === "boolean") return value ? "true" : "false";
  return String(value);
}

/** A control's value in a sentence; a window as its two ends. */
export function printed(value: unknown): string {
  if (typeof value === "object" && value !== null && "from" in value && "to" in value) return `${String(value.from)} to ${String(value.to)}`;
  return String(value);
}
