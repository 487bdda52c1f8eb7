// The periodogram and its smoothed form on a logarithmic scale, over frequencies in cycles a period.

import type { Spectrum } from "../../stdlib/index.ts";
import type { ChartPart } from "./part.ts";
import { pickNumbers, thin } from "./thin.ts";

const mostGuides = 6;

/** @param season  season length in periods, whose frequency and multiples are marked; null for none */
export function spectrumChart(title: string, alt: string, unit: string, spectrum: Spectrum, season: number | null, width: number): ChartPart {
  const x = { field: "frequency", type: "quantitative", title: "frequency (cycles a period)", scale: { nice: false, zero: true }, axis: { grid: false } };
  const y = (field: string): Record<string, unknown> => ({ field, type: "quantitative", title: unit ? `density (${unit}² × periods)` : "density", scale: { type: "log", nice: false }, axis: { tickCount: 4, format: ",~g" } });
  // A logarithm has no place for 0; ordinates far below the rest would only squeeze the others.
  const floor = spectrum.raw.reduce((top, v) => Math.max(top, v), 0) * 1e-7;
  const columns = (values: Float64Array): { frequency: Float64Array; value: Float64Array } => {
    const kept = thin(values, width);
    return { frequency: pickNumbers(spectrum.frequency, kept), value: pickNumbers(values, kept).map(v => Math.max(v, floor)) };
  };
  const guides = season === null ? [] : Array.from({ length: Math.min(mostGuides, Math.floor(season / 2)) }, (_, k) => (k + 1) / season);
  return {
    part: "chart", title, alt, height: 230,
    spec: {
      layer: [
        { data: { name: "guides" }, mark: { type: "rule", style: "guide", strokeDash: [2, 3] }, encoding: { x } },
        { data: { name: "raw" }, mark: { type: "line", style: "guide", strokeWidth: 0.8, size: 0.8, strokeDash: [] }, encoding: { x, y: y("value") } },
        { data: { name: "smoothed" }, mark: { type: "line", style: "model" }, encoding: { x, y: y("value") } },
      ],
    },
    data: { guides: { frequency: guides }, raw: columns(spectrum.raw), smoothed: columns(spectrum.smoothed) },
    full: { spectrum: {
      frequency: spectrum.frequency, periodogram: spectrum.raw, smoothed: spectrum.smoothed,
      low: spectrum.smoothed.map(v => v * spectrum.lowFactor), high: spectrum.smoothed.map(v => v * spectrum.highFactor),
    } },
  };
}
