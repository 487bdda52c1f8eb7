// The inverse roots of a model's lag polynomials on a half dial: outwards memory, around it the cycle.

import type { Root } from "../../stdlib/index.ts";
import type { ChartPart } from "./part.ts";

export const shapes = { domain: ["autoregressive", "moving average"], range: ["circle", "diamond"] } as const;

/** Periods until half is forgotten, at the rings: an inverse root at distance r has forgotten half after ln 2 / -ln r. */
const halves = [1, 2, 5];

/** Inverse roots 1/z inside the unit half circle. Roots with an imaginary part come in pairs, mirrored: one of each is drawn.
 *  @param seasonLength  0 where there is no season; else its cycles are the spokes
 *  @param width         of the picture, in pixels: the dial is as tall as half of it */
export function rootsChart(roots: { readonly ar: readonly Root[]; readonly ma: readonly Root[] }, alt: string, seasonLength: number, width: number): ChartPart {
  const points = [...roots.ar.map(root => inverse(root, "autoregressive")), ...roots.ma.map(root => inverse(root, "moving average"))].filter(point => point.y > -1e-9);
  const reach = Math.max(1.16, ...points.map(point => 1.08 * point.distance));
  const rings = [...halves.map(periods => ({ radius: 0.5 ** (1 / periods), label: String(periods) })), { radius: 1, label: "∞" }];
  const spokes = cyclesOf(seasonLength).map(cycle => ({ label: String(Number(cycle.toFixed(2))), angle: 2 * Math.PI / cycle }));
  const lines = [0, ...spokes.map(spoke => spoke.angle)];
  const across = Math.min(width, 560);
  return {
    part: "chart", title: "Inverse roots: memory outwards, cycle around", alt, height: Math.round((across / 2) * (reach + BELOW) / reach) + 24,
    spec: {
      layer: [
        { data: { name: "corners" }, mark: { type: "point", opacity: 0, tooltip: false }, encoding: { x: axis("x", reach), y: axis("y", reach) } },
        { data: { name: "spokes" }, mark: { type: "rule", style: "guide", opacity: 0.6 }, encoding: { x: axis("fromX", reach), y: axis("fromY", reach), x2: { field: "toX" }, y2: { field: "toY" } } },
        { data: { name: "rings" }, mark: { type: "line", style: "guide", opacity: 0.8 }, encoding: { x: axis("x", reach), y: axis("y", reach), detail: { field: "ring", type: "nominal" }, order: { field: "step", type: "quantitative" } } },
        { data: { name: "rim" }, mark: { type: "line", style: "limit" }, encoding: { x: axis("x", reach), y: axis("y", reach), order: { field: "step", type: "quantitative" } } },
        { data: { name: "cycles" }, mark: { type: "text", style: "label" }, encoding: { x: axis("x", reach), y: axis("y", reach), text: { field: "label", type: "nominal" } } },
        { data: { name: "memories" }, mark: { type: "text", style: "label", baseline: "top", dy: 6 }, encoding: { x: axis("x", reach), y: axis("y", reach), text: { field: "label", type: "nominal" } } },
        {
          data: { name: "roots" }, mark: { type: "point", style: "mark", filled: true, size: 90, opacity: 0.9 },
          encoding: {
            x: axis("x", reach), y: axis("y", reach),
            shape: { field: "side", type: "nominal", scale: shapes, legend: { title: null, orient: "bottom" } },
            tooltip: [
              { field: "side", title: "factor" }, { field: "distance", type: "quantitative", title: "distance from the middle", format: ".3f" },
              { field: "half", title: "half is forgotten after" }, { field: "cycle", title: "cycle" },
            ],
          },
        },
      ],
    },
    data: {
      corners: { x: [-reach, reach], y: [-BELOW, reach] },
      rings: arcs(halves.map(periods => 0.5 ** (1 / periods))), rim: arcs([1]),
      spokes: { fromX: lines.map(() => 0), fromY: lines.map(() => 0), toX: lines.map(Math.cos), toY: lines.map(Math.sin) },
      cycles: { x: spokes.map(s => 1.08 * Math.cos(s.angle)), y: spokes.map(s => 1.08 * Math.sin(s.angle)), label: spokes.map(s => s.label) },
      // To the left stands what they count.
      memories: { x: [...rings.map(ring => ring.radius), -0.5], y: [...rings.map(() => 0), 0], label: [...rings.map(ring => ring.label), "periods to forget half:"] },
      roots: {
        x: points.map(p => p.x), y: points.map(p => p.y), side: points.map(p => p.side), distance: points.map(p => p.distance),
        half: points.map(p => halfOf(p.distance)), cycle: points.map(p => cycleOf(p.x, p.y)),
      },
    },
  };
}

/** Room under the base line for its figures, in radii. */
const BELOW = 0.12;

function arcs(radii: readonly number[]): { readonly x: number[]; readonly y: number[]; readonly ring: number[]; readonly step: number[] } {
  const steps = Array.from({ length: 61 }, (_, i) => Math.PI * i / 60);
  return {
    x: radii.flatMap(r => steps.map(angle => r * Math.cos(angle))), y: radii.flatMap(r => steps.map(angle => r * Math.sin(angle))),
    ring: radii.flatMap(r => steps.map(() => r)), step: radii.flatMap(() => steps.map((_, i) => i)),
  };
}

/** The cycles that get a spoke, in periods: those of the season, or some common ones. */
function cyclesOf(seasonLength: number): readonly number[] {
  if (seasonLength < 2) return [12, 6, 4, 3, 2];
  const most = Math.min(Math.floor(seasonLength / 2), 6);
  const own = Array.from({ length: most }, (_, i) => seasonLength / (i + 1));
  return own.includes(2) ? own : [...own, 2];
}

/** The same unit to both sides, in the middle of whatever width the page gives: the circle has to look like one. */
function axis(field: string, reach: number): Record<string, unknown> {
  const unit = `min(width / ${2 * reach}, height / ${reach + BELOW})`;
  const horizontal = field.endsWith("x") || field.endsWith("X");
  const range = horizontal
    ? [{ expr: `width / 2 - ${reach} * ${unit}` }, { expr: `width / 2 + ${reach} * ${unit}` }]
    : [{ expr: "height" }, { expr: `height - ${reach + BELOW} * ${unit}` }];
  return { field, type: "quantitative", axis: null, scale: { domain: horizontal ? [-reach, reach] : [-BELOW, reach], nice: false, zero: false, range } };
}

function inverse(root: Root, side: string): { readonly x: number; readonly y: number; readonly side: string; readonly distance: number } {
  const size = root.re * root.re + root.im * root.im;
  return { x: root.re / size, y: -root.im / size || 0, side, distance: 1 / Math.sqrt(size) };
}

function halfOf(distance: number): string {
  if (distance >= 1 - 1e-9) return "never";
  const periods = Math.LN2 / -Math.log(distance);
  return periods < 0.95 ? "less than a period" : `${periods.toPrecision(2)} periods`;
}

/** How many periods a turn of the root's angle takes. */
function cycleOf(x: number, y: number): string {
  const angle = Math.abs(Math.atan2(y, x));
  if (angle < 1e-6) return "none (on the real line)";
  return `${(2 * Math.PI / angle).toFixed(1)} periods`;
}
