// From a chart's description to a specification that the chart library can run: the one door to vega-lite.
// The result depends on the shape of the description only, so that views can be kept while data change.

import { compile } from "vega-lite";
import type { TopLevelSpec } from "vega-lite";
import type { Spec } from "vega";
import { chartConfig, timeLabels } from "./chartTheme.ts";
import type { ChartPart } from "../../cells/parts/part.ts";

export interface CompiledChart {
  readonly spec: Spec;
  /** Whether the library fits the picture to a width by itself; else its width signals are set until it fits. */
  readonly fits: boolean;
  /** Signals that hold widths of panels, for charts of several panels. */
  readonly widthSignals: readonly string[];
  /** Names of the data sets and of the signals that the picture has. */
  readonly dataNames: ReadonlySet<string>;
  readonly signalNames: ReadonlySet<string>;
}

/** Equal for charts that can share a compiled picture. A single panel's height is set as it is drawn; those of several are part of the shape. */
export function shapeOf(part: ChartPart): string { return JSON.stringify([part.spec, Object.keys(part.data), severalPanels(part.spec) ? part.height : 0]); }

type Loose = Record<string, unknown>;

/** @throws Error in the chart library's words when the specification makes no sense */
export function compileChart(part: ChartPart): CompiledChart {
  const spec = structuredClone(part.spec) as Loose;
  refuseOutside(spec);
  useUtc(spec);
  overlay(spec);
  const several = severalPanels(spec);
  const names = Object.keys(part.data);
  if (!("data" in spec) && names.length > 0) spec.data = { name: names[0] };
  if (!several) { spec.width ??= 600; if (spec.width === "container") spec.width = 600; spec.height ??= part.height; if (spec.height === "container") spec.height = part.height; spec.autosize = { type: "fit", contains: "padding" }; }
  else fillPanels(spec, part.height);
  const given = (spec.config ?? {}) as Loose;
  spec.config = mergeConfig(chartConfig, given);
  // What is drawn takes its options from the page alone, where notes for other programs (`usermeta`) could give some.
  const { $schema: _schema, usermeta: _notes, ...compiled } = compile(spec as unknown as TopLevelSpec, { logger: silent() }).spec;
  const signals = (compiled.signals ?? []) as readonly { name: string; value?: unknown }[];
  return {
    spec: compiled, fits: !several,
    // A stack's common width is the picture's own; other panels have signals.
    widthSignals: several ? [...(typeof compiled.width === "number" ? ["width"] : []), ...signals.filter(({ name, value }) => /[wW]idth$/.test(name) && typeof value === "number").map(({ name }) => name)] : [],
    dataNames: new Set((compiled.data ?? []).map(({ name }) => name)), signalNames: new Set(signals.map(({ name }) => name)),
  };
}

function severalPanels(spec: Readonly<Record<string, unknown>>): boolean {
  const encoding = (spec.encoding ?? {}) as Loose;
  return ["hconcat", "vconcat", "concat", "facet", "repeat"].some((word) => word in spec) || "row" in encoding || "column" in encoding || "facet" in encoding;
}

/** Panels of a stack share the height where they name none, and start from one width. */
function fillPanels(spec: Loose, height: number): void {
  const panels = (spec.vconcat ?? spec.hconcat ?? spec.concat) as Loose[] | undefined;
  if (!panels) { const inner = spec.spec as Loose | undefined; if (inner && (inner.width === undefined || inner.width === "container")) inner.width = 300; return; }
  const each = "vconcat" in spec ? Math.max(60, height / panels.length - 45) : Math.max(80, height - 55);
  for (const panel of panels) {
    if (panel.width === undefined || panel.width === "container") panel.width = "vconcat" in spec ? 500 : 500 / panels.length;
    if (panel.height === undefined || panel.height === "container") panel.height = Math.round(each);
  }
}

/** Time axes in UTC: the reader's own clock must not move a month's first day into the month before. */
function useUtc(node: unknown): void {
  if (Array.isArray(node)) { node.forEach(useUtc); return; }
  if (typeof node !== "object" || node === null) return;
  const one = node as Loose;
  if (one.type === "temporal" && typeof one.field === "string") {
    if (typeof one.timeUnit === "string") { if (!one.timeUnit.startsWith("utc")) one.timeUnit = `utc${one.timeUnit}`; }
    else if (one.scale !== null && one.timeUnit === undefined) one.scale = { type: "utc", ...(one.scale as Loose | undefined) };
    const axis = (one.axis ?? {}) as Loose;
    if (one.axis !== null && one.timeUnit === undefined && axis.format === undefined && axis.labelExpr === undefined) one.axis = { ...axis, labelExpr: timeLabels };
  }
  Object.values(one).forEach(useUtc);
}

/** Points laid over a line wear the line's own style. */
function overlay(node: unknown): void {
  if (Array.isArray(node)) { node.forEach(overlay); return; }
  if (typeof node !== "object" || node === null) return;
  const one = node as Loose;
  const mark = one.mark as Loose | undefined;
  if (typeof mark === "object" && mark.point === true && typeof mark.style === "string") {
    const { color, filled, shape } = ((chartConfig.style as Record<string, Loose>)[mark.style] ?? {}) as Loose;
    mark.point = { color, filled: filled ?? true, shape };
  }
  Object.values(one).forEach(overlay);
}

/** A chart reads no address and runs no bound element. */
function refuseOutside(node: unknown): void {
  if (Array.isArray(node)) { node.forEach(refuseOutside); return; }
  if (typeof node !== "object" || node === null) return;
  const one = node as Loose;
  if (typeof one.url === "string") throw new Error(`The chart asks for data at ${one.url}; give it rows, a series or a forecast instead.`);
  if ("bind" in one && typeof one.bind === "object") throw new Error("The chart binds a control of its own; use a slider, choice or switch cell instead.");
  Object.values(one).forEach(refuseOutside);
}

function mergeConfig(ours: Loose, given: Loose): Loose {
  const merged: Loose = { ...ours };
  for (const [name, value] of Object.entries(given)) {
    const own = merged[name];
    merged[name] = typeof value === "object" && value !== null && !Array.isArray(value) && typeof own === "object" && own !== null && !Array.isArray(own) ? mergeConfig(own as Loose, value as Loose) : value;
  }
  return merged;
}

/** The library's remarks are for the writer of a kind, not for a reader. */
function silent(): { level: () => never; error: () => never; warn: () => never; info: () => never; debug: () => never } {
  const self = { level: () => self as never, error: () => self as never, warn: () => self as never, info: () => self as never, debug: () => self as never };
  return self;
}
