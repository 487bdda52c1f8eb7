// Several series one above another on one time axis, each with its own scale.

import { timeField } from "./fanChart.ts";
import type { ChartPart, Columns } from "./part.ts";
import { pickNumbers, thin } from "./thin.ts";

export interface LinePanel {
  readonly title: string;
  /** UTC milliseconds, or plain numbers where undated. */
  readonly time: Float64Array;
  readonly value: Float64Array;
}

const panelHeight = 74;
/** Room between panels, as a share of a panel's height. */
const gap = 0.34;

export function panelChart(given: { readonly title: string; readonly alt: string; readonly dated: boolean; readonly panels: readonly LinePanel[]; readonly width: number }): ChartPart {
  const { panels } = given;
  const share = 1 / (panels.length + (panels.length - 1) * gap);
  const x = timeField("time", given.dated);
  const data: Record<string, Columns> = {};
  const layers = panels.map((panel, i) => {
    const key = `panel${i + 1}`, kept = thin(panel.value, given.width);
    const time = pickNumbers(panel.time, kept), value = pickNumbers(panel.value, kept);
    data[key] = { time, value };
    data[`${key}Title`] = { time: panel.time.slice(0, 1), text: [panel.title] };
    const top = i * (1 + gap) * share;
    const y = {
      field: "value", type: "quantitative", title: null, scale: { range: [{ expr: `height * ${top + share}` }, { expr: `height * ${top}` }], zero: false, nice: true },
      axis: { orient: "left", tickCount: 3, grid: false, minExtent: 40 },
    };
    return {
      layer: [
        { data: { name: key }, mark: { type: "line", style: "sample" }, encoding: { x, y } },
        // The title stands above its panel's left end, in pixels of the whole picture.
        { data: { name: `${key}Title` }, mark: { type: "text", style: "label", align: "left", baseline: "bottom", dy: -3 }, encoding: { x: { value: 0 }, y: { value: { expr: `height * ${top}` } }, text: { field: "text", type: "nominal" } } },
      ],
    };
  });
  return {
    part: "chart", title: given.title, alt: given.alt, height: panels.length * panelHeight * (1 + gap) + 50,
    spec: { padding: { top: 16, left: 2, right: 6, bottom: 2 }, resolve: { scale: { y: "independent" }, axis: { y: "independent" } }, layer: layers },
    data,
    full: Object.fromEntries(panels.map(panel => [panel.title, { time: panel.time, value: panel.value }])),
  };
}
