// Tests of different kinds on one line: each statistic as a multiple of its own 5% critical value.

import type { ChartPart } from "./part.ts";
import { figure } from "./words.ts";

export interface RatioRow {
  readonly label: string;
  readonly statistic: number;
  /** Critical values by "1%", "5%", "10%"; the row is left out where "5%" is not there. */
  readonly critical: Readonly<Record<string, number>>;
}

/** Right of 1, whatever the test's own sign, its null hypothesis is rejected at 5%. */
export function ratioChart(title: string, alt: string, rows: readonly RatioRow[]): ChartPart {
  const usable = rows.filter(row => Number.isFinite(row.critical["5%"]) && Number.isFinite(row.statistic));
  const ratio = (row: RatioRow, value: number): number => value / row.critical["5%"];
  const ticks = usable.flatMap(row => ["10%", "5%", "1%"].filter(level => Number.isFinite(row.critical[level])).map(level => ({ label: row.label, at: ratio(row, row.critical[level]), level })));
  const y = { field: "label", type: "nominal", sort: null, axis: { title: null, ticks: false, domain: false, labelLimit: 170 } };
  const x = (field: string): Record<string, unknown> => ({ field, type: "quantitative", title: "statistic ÷ its 5% critical value", scale: { zero: true, nice: false, padding: 34 }, axis: { grid: false } });
  return {
    part: "chart", title, alt, height: 60 + 40 * usable.length,
    spec: {
      layer: [
        { data: { values: [{ one: 1 }] }, mark: { type: "rule", style: "limit" }, encoding: { x: x("one") } },
        { data: { name: "spans" }, mark: { type: "rule", style: "guide" }, encoding: { y, x: x("from"), x2: { field: "to" } } },
        { data: { name: "ticks" }, mark: { type: "tick", style: "limit", strokeDash: [], thickness: 1.5, size: 12 }, encoding: { y, x: x("at"), tooltip: [{ field: "level", title: "critical value at" }] } },
        { data: { name: "ticks" }, mark: { type: "text", style: "label", dy: 13, fontSize: 9 }, encoding: { y, x: x("at"), text: { field: "level", type: "nominal" } } },
        { data: { name: "rows" }, transform: [{ filter: { field: "rejects", equal: false } }], mark: { type: "point", style: "mark", filled: true, size: 75, opacity: 1 }, encoding: { y, x: x("at") } },
        { data: { name: "rows" }, transform: [{ filter: { field: "rejects", equal: true } }], mark: { type: "point", style: "outside", shape: "diamond", filled: true, size: 90, opacity: 1 }, encoding: { y, x: x("at") } },
        { data: { name: "rows" }, mark: { type: "text", style: "label", dy: -11 }, encoding: { y, x: x("at"), text: { field: "shown", type: "nominal" } } },
      ],
    },
    data: {
      rows: { label: usable.map(r => r.label), at: usable.map(r => ratio(r, r.statistic)), rejects: usable.map(r => ratio(r, r.statistic) > 1), shown: usable.map(r => figure(r.statistic, 3)) },
      ticks: { label: ticks.map(t => t.label), at: ticks.map(t => t.at), level: ticks.map(t => t.level) },
      spans: { label: usable.map(r => r.label), from: usable.map(() => 0), to: usable.map(r => Math.max(ratio(r, r.statistic), ...ticks.filter(t => t.label === r.label).map(t => t.at))) },
    },
  };
}
