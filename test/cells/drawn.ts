// Draws a chart part for a test: compiles its specification, fills in its data, and gives the picture as SVG.

import { compile, type TopLevelSpec } from "vega-lite";
import { parse, View, type LoggerInterface } from "vega";
import type { ChartPart, Columns, Part } from "../../cells/parts/part.ts";

/** Every chart among the parts, drawn at 640 pixels; throws on a warning of the compiler. */
export async function drawnCharts(parts: readonly Part[]): Promise<readonly string[]> {
  const charts = parts.filter((part): part is ChartPart => part.part === "chart");
  return Promise.all(charts.map(chart => drawn(chart)));
}

export async function drawn(chart: ChartPart, width = 640): Promise<string> {
  const warnings: string[] = [];
  const logger: LoggerInterface = {
    level: () => logger, error: (...said) => { warnings.push(said.join(" ")); return logger; },
    warn: (...said) => { warnings.push(said.join(" ")); return logger; }, info: () => logger, debug: () => logger,
  } as LoggerInterface;
  const spec = { ...chart.spec, width, height: chart.height, autosize: { type: "fit", contains: "padding" }, datasets: datasetsOf(chart) } as unknown as TopLevelSpec;
  const compiled = compile(spec, { logger }).spec;
  if (warnings.length > 0) throw new Error(`"${chart.title}": ${warnings.join("; ")}`);
  const view = new View(parse(compiled, { background: "white" }), { renderer: "none" });
  try { return await view.toSVG(); } finally { view.finalize(); }
}

function datasetsOf(chart: ChartPart): Record<string, readonly Record<string, unknown>[]> {
  return Object.fromEntries(Object.entries(chart.data).map(([name, columns]) => [name, rowsOf(columns)]));
}

function rowsOf(columns: Columns): readonly Record<string, unknown>[] {
  const names = Object.keys(columns);
  const size = names.length === 0 ? 0 : columns[names[0]].length;
  for (const name of names) {
    if (columns[name].length !== size) throw new Error(`column ${name} has ${columns[name].length} values, ${names[0]} has ${size}`);
  }
  return Array.from({ length: size }, (_, i) => Object.fromEntries(names.map(name => [name, columns[name][i]])));
}
