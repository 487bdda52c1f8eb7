import { parse, View, Warn } from "vega";
import { compile, type TopLevelSpec } from "vega-lite";
import type { ChartPart } from "../../../cells/parts/part.ts";

/** Compiles a chart as the page does, with its data, and gives the SVG and what was warned about. */
export async function draw(part: ChartPart): Promise<{ readonly svg: string; readonly warnings: readonly string[] }> {
  const warnings: string[] = [];
  const logger = { warn: (...m: readonly unknown[]) => { warnings.push(m.join(" ")); return logger; }, info: () => logger, debug: () => logger, error: (...m: readonly unknown[]) => { warnings.push(m.join(" ")); return logger; }, level: () => logger };
  const datasets = Object.fromEntries(Object.entries(part.data).map(([name, columns]) => {
    const fields = Object.keys(columns);
    const n = fields.length === 0 ? 0 : columns[fields[0]].length;
    return [name, Array.from({ length: n }, (_, i) => Object.fromEntries(fields.map((f) => [f, columns[f][i]])))];
  }));
  const { width, ...spec } = part.spec;
  const { spec: compiled } = compile({ width: width === "container" || width === undefined ? 700 : width, ...spec, datasets } as unknown as TopLevelSpec, { logger: logger as never });
  const view = new View(parse(compiled), { renderer: "none", logLevel: Warn, logger: logger as never });
  return { svg: await view.toSVG(), warnings };
}
