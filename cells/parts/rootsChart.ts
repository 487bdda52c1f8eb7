// The inverse roots of a model's lag polynomials in the unit disc: inside, the model is stationary and invertible.

import type { Root } from "../../stdlib/index.ts";
import type { ChartPart } from "./part.ts";

export const shapes = { domain: ["autoregressive", "moving average"], range: ["circle", "diamond"] } as const;

/** Inverse roots 1/z against the unit circle. A root z of modulus 1.05 is drawn at distance 1/1.05 from the middle. */
export function rootsChart(roots: { readonly ar: readonly Root[]; readonly ma: readonly Root[] }, alt: string): ChartPart {
  const points = [
    ...roots.ar.map(root => inverse(root, "autoregressive")),
    ...roots.ma.map(root => inverse(root, "moving average")),
  ];
  const reach = Math.max(1.08, ...points.map(point => 1.05 * Math.max(Math.abs(point.x), Math.abs(point.y))));
  const steps = Array.from({ length: 97 }, (_, i) => 2 * Math.PI * i / 96);
  return {
    part: "chart", title: "Inverse roots against the unit circle", alt, height: 330,
    spec: {
      layer: [
        { data: { name: "corners" }, mark: { type: "point", opacity: 0, tooltip: false }, encoding: { x: axis("x", "real part"), y: axis("y", "imaginary part") } },
        { data: { name: "circle" }, mark: { type: "line", style: "limit" }, encoding: { x: axis("x", "real part"), y: axis("y", "imaginary part"), order: { field: "step", type: "quantitative" } } },
        { mark: { type: "rule", style: "guide" }, data: { values: [{ from: -1, to: 1 }] }, encoding: { x: { datum: 0, type: "quantitative" }, y: { field: "from", type: "quantitative" }, y2: { field: "to" } } },
        { mark: { type: "rule", style: "guide" }, data: { values: [{ from: -1, to: 1 }] }, encoding: { y: { datum: 0, type: "quantitative" }, x: { field: "from", type: "quantitative" }, x2: { field: "to" } } },
        {
          data: { name: "roots" }, mark: { type: "point", style: "mark", filled: true, size: 80, opacity: 0.9 },
          encoding: {
            x: axis("x", "real part"), y: axis("y", "imaginary part"),
            shape: { field: "side", type: "nominal", scale: shapes, legend: { title: null, orient: "bottom" } },
            tooltip: [
              { field: "side", title: "factor" }, { field: "distance", type: "quantitative", title: "distance from the middle", format: ".3f" },
              { field: "cycle", title: "cycle" },
            ],
          },
        },
      ],
    },
    data: {
      corners: { x: [-reach, reach], y: [-reach, reach] },
      circle: { x: steps.map(Math.cos), y: steps.map(Math.sin), step: steps.map((_, i) => i) },
      roots: {
        x: points.map(p => p.x), y: points.map(p => p.y), side: points.map(p => p.side),
        distance: points.map(p => Math.hypot(p.x, p.y)), cycle: points.map(p => cycle(p.x, p.y)),
      },
    },
  };
}

/** A square in the middle of whatever width the page gives: the circle has to look like one. */
const square: Readonly<Record<string, readonly unknown[]>> = {
  x: [{ expr: "(width - min(width, height)) / 2" }, { expr: "(width + min(width, height)) / 2" }],
  y: [{ expr: "(height + min(width, height)) / 2" }, { expr: "(height - min(width, height)) / 2" }],
};

function axis(field: "x" | "y", title: string): Record<string, unknown> {
  return { field, type: "quantitative", title, scale: { nice: false, zero: false, range: square[field] }, axis: { values: [-1, -0.5, 0, 0.5, 1], grid: false, ticks: true, domain: true, ...(field === "y" ? { offset: { expr: "(min(width, height) - width) / 2" } } : {}) } };
}

function inverse(root: Root, side: string): { x: number; y: number; side: string } {
  const size = root.re * root.re + root.im * root.im;
  return { x: root.re / size, y: -root.im / size, side };
}

/** How many periods a turn of the root's angle takes. */
function cycle(x: number, y: number): string {
  const angle = Math.abs(Math.atan2(y, x));
  if (angle < 1e-6) return "none (on the real line)";
  return `${(2 * Math.PI / angle).toFixed(1)} periods`;
}
