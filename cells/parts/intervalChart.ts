// Estimates with their intervals on one scale, against zero: one row an estimate, its figures above it.

import type { ChartPart } from "./part.ts";
import { figure } from "./words.ts";

export interface IntervalRow {
  readonly label: string;
  readonly value: number;
  /** NaN where there is no interval (held, or not available). */
  readonly low: number;
  readonly high: number;
  /** One standard error, where it is to be read too. */
  readonly se?: number;
  /** Said in place of the interval's limits where there is none ("held"). */
  readonly remark?: string;
}

/** @param axis  title of the common scale, with its unit */
export function intervalChart(title: string, alt: string, axis: string, rows: readonly IntervalRow[]): ChartPart {
  const withInterval = rows.filter(row => Number.isFinite(row.low) && Number.isFinite(row.high));
  return {
    part: "chart", title, alt, height: 56 + 36 * roomFor(rows.length),
    spec: {
      encoding: { y: { field: "label", type: "nominal", sort: null, axis: null } },
      layer: [
        { data: { name: "rows" }, mark: { type: "rule", style: "guide" }, encoding: { x: { datum: 0, type: "quantitative" }, y: null } },
        // All rows first: the order of the rows is that of the first layer that names them.
        { data: { name: "rows" }, mark: { type: "point", opacity: 0, tooltip: false }, encoding: { x: { field: "value", type: "quantitative" } } },
        {
          data: { name: "intervals" }, mark: { type: "rule", style: "mark", strokeWidth: 2, yOffset: 7 },
          encoding: { x: { field: "low", type: "quantitative", title: axis, scale: { zero: true, nice: true } }, x2: { field: "high" } },
        },
        {
          data: { name: "rows" }, mark: { type: "point", style: "mark", filled: true, size: 70, opacity: 1, yOffset: 7 },
          encoding: { x: { field: "value", type: "quantitative" } },
        },
        // What a row is and its figures stand on a line of their own, so that the scale has the whole width on a phone too.
        {
          data: { name: "rows" }, mark: { type: "text", style: "label", align: "left", baseline: "middle", dy: -9 },
          encoding: { x: { value: 0 }, text: { field: "figures", type: "nominal" } },
        },
      ],
    },
    data: {
      rows: { label: rows.map(row => row.label), value: rows.map(row => row.value), figures: rows.map(row => `${row.label}: ${figuresOf(row)}`) },
      intervals: { label: withInterval.map(row => row.label), low: withInterval.map(row => row.low), high: withInterval.map(row => row.high) },
    },
  };
}

/** Room for a few rows more than there are: a picture that keeps its size is updated, not made anew, when a lag is added. */
function roomFor(rows: number): number {
  return rows <= 2 ? 2 : Math.ceil(rows / 2) * 2;
}

function figuresOf(row: IntervalRow): string {
  if (row.remark !== undefined) return `${figure(row.value)} ${row.remark}`;
  if (!Number.isFinite(row.low)) return figure(row.value);
  const within = row.se === undefined ? "" : ` ± ${figure(row.se, 2)}`;
  return `${figure(row.value)}${within} (${figure(row.low, 2)} to ${figure(row.high, 2)})`;
}
