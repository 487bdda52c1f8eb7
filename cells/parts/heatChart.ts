// A surface of orders as tiles: how far each pair stands behind the best, by shade and by figure.

import type { ChartPart } from "./part.ts";

export interface Tile {
  readonly column: number | string;
  readonly row: number | string;
  /** Difference to the best, 0 or more; NaN where there is none to show. */
  readonly difference: number;
  /** What stands in a tile without a difference. */
  readonly word?: string;
  readonly remark?: string;
}

/** Tiles are darkest at 0 and fade out at 10, where a model has next to no support (Burnham & Anderson 2002, section 2.6). */
export function heatChart(given: {
  readonly title: string; readonly alt: string; readonly across: string; readonly up: string; readonly tiles: readonly Tile[];
}): ChartPart {
  const tiles = given.tiles;
  const rows = new Set(tiles.map(tile => tile.row)).size;
  return {
    part: "chart", title: given.title, alt: given.alt, height: 70 + 36 * rows,
    spec: {
      data: { name: "tiles" },
      encoding: {
        x: { field: "column", type: "ordinal", sort: null, title: given.across, axis: { labelAngle: 0, domain: false, ticks: false } },
        y: { field: "row", type: "ordinal", sort: null, title: given.up, axis: { domain: false, ticks: false } },
      },
      layer: [
        {
          mark: { type: "rect", style: "mark", stroke: null, strokeWidth: 0 },
          encoding: {
            fillOpacity: { field: "nearness", type: "quantitative", scale: { domain: [0, 1], range: [0.03, 0.42] }, legend: null },
            tooltip: [{ field: "column", title: given.across }, { field: "row", title: given.up }, { field: "shown", title: "behind the best" }, { field: "remark", title: "remark" }],
          },
        },
        { transform: [{ filter: { field: "best", equal: true } }], mark: { type: "rect", style: "model", filled: false, fillOpacity: 0, strokeWidth: 2 } },
        { mark: { type: "text", style: "label", baseline: "middle", align: "center" }, encoding: { text: { field: "shown", type: "nominal" } } },
      ],
    },
    data: {
      tiles: {
        column: tiles.map(tile => String(tile.column)), row: tiles.map(tile => String(tile.row)),
        nearness: tiles.map(tile => Number.isNaN(tile.difference) ? 0 : Math.max(0, 1 - tile.difference / 10)),
        difference: tiles.map(tile => tile.difference),
        best: tiles.map(tile => tile.difference === 0),
        shown: tiles.map(tile => Number.isNaN(tile.difference) ? tile.word ?? "failed" : tile.difference === 0 ? "best" : tile.difference >= 99.5 ? Math.round(tile.difference).toString() : tile.difference.toFixed(1)),
        remark: tiles.map(tile => tile.remark ?? ""),
      },
    },
  };
}
