// Standardised residuals in time; the large ones carry their dates.

import { timesMs, type Series } from "../../stdlib/index.ts";
import { timeField } from "./fanChart.ts";
import type { ChartPart } from "./part.ts";
import { pick, pickNumbers, thin } from "./thin.ts";
import { figure } from "./words.ts";

export interface LargeResidual { readonly time: string; readonly index: number; readonly value: number }

const limit = 3;
const mostNamed = 6;

/** Residuals beyond three standard deviations, the largest first. */
export function largeResiduals(standardised: Series): readonly LargeResidual[] {
  const found: LargeResidual[] = [];
  standardised.values.forEach((value, index) => { if (Math.abs(value) > limit) found.push({ time: standardised.times[index], index, value }); });
  return found.sort((a, b) => Math.abs(b.value) - Math.abs(a.value));
}

export function residualChart(title: string, alt: string, standardised: Series, width: number): ChartPart {
  const ms = timesMs(standardised);
  const kept = Array.from(thin(standardised.values, width)).filter(i => !Number.isNaN(standardised.values[i]));
  const large = largeResiduals(standardised);
  const named = large.slice(0, mostNamed);
  const x = timeField("time", standardised.every !== null);
  const y = { field: "value", type: "quantitative", title: "residual (standard deviations)", scale: { zero: true, padding: 16 }, axis: { tickCount: 5 } };
  return {
    part: "chart", title, alt, height: 220,
    spec: {
      layer: [
        { data: { name: "limits" }, mark: { type: "rule", style: "limit" }, encoding: { y: { ...y, field: "at" } } },
        { data: { name: "residuals" }, mark: { type: "rule", style: "mark", strokeWidth: 1, size: 1 }, encoding: { x, y: { ...y, field: "zero" }, y2: { field: "value" } } },
        { data: { name: "large" }, mark: { type: "point", style: "outside", shape: "diamond", filled: true, size: 62, opacity: 1 }, encoding: { x, y, tooltip: [{ field: "name", title: "period" }, { field: "value", type: "quantitative", title: "residual", format: ".2f" }] } },
        // Text stands beyond the mark by a distance in pixels, on the side away from zero, whatever the scale.
        ...[{ up: true, baseline: "bottom", dy: -7 }, { up: false, baseline: "top", dy: 8 }].map(({ up, baseline, dy }) => ({
          data: { name: "named" }, transform: [{ filter: { field: "up", equal: up } }], mark: { type: "text", style: "label", align: "center", baseline, dy }, encoding: { x, y, text: { field: "name", type: "nominal" } },
        })),
      ],
    },
    data: {
      limits: { at: [-limit, limit] },
      residuals: { time: pickNumbers(ms, kept), value: pickNumbers(standardised.values, kept), zero: new Float64Array(kept.length) },
      large: { time: large.map(one => ms[one.index]), value: large.map(one => one.value), name: large.map(one => one.time) },
      named: { time: named.map(one => ms[one.index]), value: named.map(one => one.value), up: named.map(one => one.value > 0), name: named.map(one => one.time) },
    },
    full: { residuals: { time: pick(standardised.times, standardised.times.map((_, i) => i)), value: standardised.values } },
  };
}

/** "2020-03 (−4.2), 2021-07 (3.4)". */
export function largeInWords(large: readonly LargeResidual[], most = 4): string {
  const named = large.slice(0, most).map(one => `${one.time} (${figure(one.value, 2)})`);
  return large.length > most ? `${named.join(", ")} and ${large.length - most} more` : named.join(", ");
}
