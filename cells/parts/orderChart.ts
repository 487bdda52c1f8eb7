// A table over AR and MA orders as tiles: shaded where a statistic is within chance, its corner outlined.

import type { ChartPart } from "./part.ts";
import { decimals } from "./words.ts";

export interface OrderTiles {
  readonly maxAr: number; readonly maxMa: number;
  /** Flat by rows, a row an AR order. */
  readonly values: ArrayLike<number>;
  readonly beyond: ArrayLike<number>;
  readonly suggests: { readonly ar: number; readonly ma: number } | null;
}

export function orderChart(title: string, alt: string, table: OrderTiles): ChartPart {
  const columns = table.maxMa + 1;
  const places = Array.from({ length: (table.maxAr + 1) * columns }, (_, i) => ({ i, ar: Math.floor(i / columns), ma: i % columns }));
  const { suggests } = table;
  return {
    part: "chart", title, alt, height: 60 + 26 * (table.maxAr + 1),
    spec: {
      data: { name: "tiles" },
      encoding: {
        x: { field: "ma", type: "ordinal", sort: "ascending", title: "MA order", axis: { labelAngle: 0, domain: false, ticks: false } },
        y: { field: "ar", type: "ordinal", sort: "ascending", title: "AR order", axis: { domain: false, ticks: false } },
      },
      layer: [
        { transform: [{ filter: { field: "beyond", equal: false } }], mark: { type: "rect", style: "mark", stroke: null, strokeWidth: 0, fillOpacity: 0.16 } },
        { transform: [{ filter: { field: "corner", equal: true } }], mark: { type: "rect", style: "model", filled: false, fillOpacity: 0, strokeWidth: 2 } },
        { mark: { type: "text", style: "label", baseline: "middle", align: "center", fontSize: 10 }, encoding: { text: { field: "shown", type: "nominal" } } },
      ],
    },
    data: {
      tiles: {
        ar: places.map(place => place.ar), ma: places.map(place => place.ma), value: places.map(({ i }) => table.values[i]),
        beyond: places.map(({ i }) => table.beyond[i] === 1), shown: places.map(({ i }) => decimals(table.values[i], 2)),
        corner: places.map(({ ar, ma }) => suggests !== null && suggests.ar === ar && suggests.ma === ma),
      },
    },
  };
}
