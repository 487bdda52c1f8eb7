// Tests of different kinds on one line: each statistic as a multiple of its own critical value.

import type { ChartPart } from "./part.ts";
import { figure } from "./words.ts";

export interface RatioRow {
  readonly label: string;
  readonly statistic: number;
  /** Critical values by "1%", "5%", "10%"; the row is left out where that of the scale is not there. */
  readonly critical: Readonly<Record<string, number>>;
  readonly rejects: boolean;
}

const nearest = 0.8;
const farthest = 2.6;

/** Right of 1, whatever the test's own sign, the statistic is beyond its critical value.
 *  @param base  the significance whose critical value is 1 */
export function ratioChart(title: string, alt: string, rows: readonly RatioRow[], base = "5%"): ChartPart {
  const usable = rows.filter(row => Number.isFinite(row.critical[base]) && Number.isFinite(row.statistic));
  const ratio = (row: RatioRow, value: number): number => value / row.critical[base];
  // Far out a statistic says no more: it is drawn at the edge with an arrow, so that the critical values stay apart.
  const placed = (row: RatioRow): number => Math.max(-nearest, Math.min(farthest, ratio(row, row.statistic)));
  const figures = (row: RatioRow): string => `${row.label}: ${ratio(row, row.statistic) < -nearest ? "← " : ""}${figure(row.statistic, 3)}${ratio(row, row.statistic) > farthest ? " →" : ""}`;
  const ticks = usable.flatMap(row => ["10%", "5%", "1%"].filter(level => Number.isFinite(row.critical[level])).map(level => ({ label: row.label, at: ratio(row, row.critical[level]), level })));
  const y = { field: "label", type: "nominal", sort: null, axis: null };
  const x = (field: string): Record<string, unknown> => ({ field, type: "quantitative", title: `multiple of the ${base} critical value; beyond 1 it rejects`, scale: { zero: true, nice: false, padding: 12 }, axis: { grid: false } });
  return {
    part: "chart", title, alt, height: 56 + 38 * usable.length,
    spec: {
      layer: [
        { data: { values: [{ one: 1 }] }, mark: { type: "rule", style: "limit" }, encoding: { x: x("one") } },
        { data: { name: "spans" }, mark: { type: "rule", style: "guide", yOffset: 7 }, encoding: { y, x: x("from"), x2: { field: "to" } } },
        { data: { name: "ticks" }, mark: { type: "tick", style: "limit", strokeDash: [], thickness: 1.5, size: 12, yOffset: 7 }, encoding: { y, x: x("at"), tooltip: [{ field: "level", title: "critical value at" }] } },
        { data: { name: "rows" }, transform: [{ filter: { field: "rejects", equal: false } }], mark: { type: "point", style: "mark", filled: true, size: 75, opacity: 1, yOffset: 7 }, encoding: { y, x: x("at") } },
        { data: { name: "rows" }, transform: [{ filter: { field: "rejects", equal: true } }], mark: { type: "point", style: "outside", shape: "diamond", filled: true, size: 90, opacity: 1, yOffset: 7 }, encoding: { y, x: x("at") } },
        { data: { name: "rows" }, mark: { type: "text", style: "label", align: "left", baseline: "middle", dy: -9 }, encoding: { y, x: { value: 0 }, text: { field: "shown", type: "nominal" } } },
      ],
    },
    data: {
      rows: { label: usable.map(r => r.label), at: usable.map(placed), rejects: usable.map(r => r.rejects), shown: usable.map(figures) },
      ticks: { label: ticks.map(t => t.label), at: ticks.map(t => t.at), level: ticks.map(t => t.level) },
      spans: { label: usable.map(r => r.label), from: usable.map(() => 0), to: usable.map(r => Math.max(placed(r), ...ticks.filter(t => t.label === r.label).map(t => t.at))) },
    },
  };
}
