// Spread against level, block by block: does a logarithm or a root have to come first?

import type { RangeMean } from "../../stdlib/index.ts";
import type { ChartPart } from "./part.ts";

/** @param unit  of the values; "" when not known */
export function spreadChart(blocks: RangeMean, unit: string): ChartPart {
  const named = unit ? ` (${unit})` : "";
  const x = { field: "level", type: "quantitative", title: `mean of ${blocks.length} periods${named}`, scale: { zero: false, padding: 10 }, axis: { grid: false } };
  const y = { field: "spread", type: "quantitative", title: `standard deviation${named}`, scale: { zero: true } };
  return {
    part: "chart", title: "Spread against level, block by block", alt: blocks.sentence, height: 210,
    spec: {
      data: { name: "blocks" }, mark: { type: "point", style: "mark", filled: true, size: 46, opacity: 0.9 },
      encoding: {
        x, y,
        tooltip: [
          { field: "from", title: "block from" }, { field: "level", type: "quantitative", title: "mean", format: ",.4~r" },
          { field: "spread", type: "quantitative", title: "standard deviation", format: ",.4~r" }, { field: "range", type: "quantitative", title: "range", format: ",.4~r" },
        ],
      },
    },
    data: { blocks: { from: blocks.from, level: blocks.mean, spread: blocks.sd, range: blocks.range } },
  };
}
