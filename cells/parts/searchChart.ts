// The models of a stepwise search in the order in which they were tried; those it moved to are joined.

import type { PathStep } from "../../stdlib/index.ts";
import type { ChartPart } from "./part.ts";

export function searchChart(title: string, alt: string, criterion: string, path: readonly PathStep[]): ChartPart {
  const steps = path.map((step, i) => ({ ...step, at: i + 1 })).filter(step => Number.isFinite(step.value));
  const x = { field: "at", type: "quantitative", title: "model tried", scale: { nice: false, zero: false, padding: 12 }, axis: { grid: false, tickMinStep: 1, format: "d" } };
  const y = { field: "value", type: "quantitative", title: criterion, scale: { zero: false } };
  const tooltip = [{ field: "label", title: "model" }, { field: "value", type: "quantitative", title: criterion, format: ",.1f" }, { field: "from", title: "neighbour of" }, { field: "aside", title: "set aside" }];
  return {
    part: "chart", title, alt, height: 220,
    spec: {
      data: { name: "steps" },
      layer: [
        { transform: [{ filter: { field: "moved", equal: true } }], mark: { type: "line", style: "model", interpolate: "step-after" }, encoding: { x, y } },
        { transform: [{ filter: { field: "moved", equal: false } }], mark: { type: "point", style: "mark", filled: false, size: 40, strokeWidth: 1.4 }, encoding: { x, y, tooltip } },
        { transform: [{ filter: { field: "moved", equal: true } }], mark: { type: "point", style: "model", filled: true, size: 70, opacity: 1 }, encoding: { x, y, tooltip } },
      ],
    },
    data: {
      steps: {
        at: steps.map(step => step.at), value: steps.map(step => step.value), label: steps.map(step => step.label), from: steps.map(step => step.from ?? "a start"),
        moved: steps.map(step => step.moved), aside: steps.map(step => step.setAside ?? ""),
      },
    },
  };
}
