// The kind that takes a series apart into trend, season and remainder, and shows which rhythms it has.

import {
  cumulativePeriodogram, decompose, defaultSeasonLength, polynomialTrend, seasonalStrength, spectrum, stl, subseries, withValues,
  type CumulativePeriodogram, type SeasonalStrength, type Series, type Spectrum, type Subseries,
} from "../stdlib/index.ts";
import { OptionError, type Kind, type OptionTable, type RunContext } from "./kind.ts";
import { decompositionParts } from "./parts/decompositionParts.ts";
import { needLevel, needVaryingSeries, plainly } from "./parts/needs.ts";
import { axisTitle, scaleText } from "./parts/scale.ts";
import { seasonLabels, type SeasonLabel } from "./parts/seasonLabels.ts";

export interface DecompositionCell {
  readonly series: unknown;
  readonly method?: "stl" | "additive" | "multiplicative";
  readonly length?: number;
  readonly seasonalWindow?: number | "periodic";
  readonly robust?: boolean;
  readonly level?: number;
}

export interface Decomposed {
  readonly of: string; readonly axis: string;
  readonly series: Series;
  readonly method: "stl" | "additive" | "multiplicative";
  /** Periods a season; null where there is none, or too few of them. */
  readonly length: number | null;
  /** Null where the series could not be taken apart; `notes` says why. */
  readonly trend: Series | null; readonly seasonal: Series | null; readonly remainder: Series | null;
  readonly strength: SeasonalStrength | null;
  /** Values less the trend (or over it) by position in the season; the values themselves where there is no trend. */
  readonly positions: readonly Subseries[];
  readonly labels: readonly SeasonLabel[];
  /** Of the series less a straight line. */
  readonly spectrum: Spectrum;
  readonly cumulativePeriodogram: CumulativePeriodogram;
  readonly notes: readonly string[];
}

const decompositionOptions: OptionTable = {
  series: { type: "series", required: true, sentence: "The series to take apart, on the scale on which season and trend add up.", example: "log(crossings)" },
  method: { type: { oneOf: ["stl", "additive", "multiplicative"] }, default: "stl", sentence: "By loess (STL), which lets the season drift, or by moving averages with a season that stays, added or multiplied." },
  length: { type: "integer", min: 2, sentence: "Periods a season; without this option, what the spacing suggests." },
  seasonalWindow: { type: { anyOf: ["integer", { oneOf: ["periodic"] }] }, default: 7, min: 3, sentence: "How many seasons STL looks across, an odd number: the fewer, the faster the season may change; \"periodic\" for one that stays." },
  robust: { type: "boolean", default: false, sentence: "Whether STL weighs down outlying values." },
  level: { type: "level", default: 0.95, sentence: "Confidence of the limits of the cumulative periodogram." },
};

/** Trend, season and remainder; the season position by position; the spectrum. */
export const decomposition: Kind<DecompositionCell, Decomposed> = {
  name: "decomposition",
  sentence: "A series taken apart into trend, season and remainder, its season position by position, and its spectrum.",
  options: decompositionOptions,
  body: "options",
  callable: true,
  example: "series: crossings",
  run: (options, context) => runDecomposition(options, context),
  show: (result, context) => decompositionParts(result, context.width),
};

async function runDecomposition(options: DecompositionCell, context: RunContext): Promise<Decomposed> {
  const series = needVaryingSeries(options.series, 8, "a decomposition"), level = needLevel(options.level), { method = "stl" } = options;
  const usual = options.length ?? defaultSeasonLength(series.every), length = usual !== null && series.n >= 2 * usual ? usual : null;
  if (options.length !== undefined && options.length !== null && length === null) throw new OptionError("length", `length is ${options.length}, and ${series.n} values are fewer than two seasons of it`);
  const { parts, why } = length === null ? { parts: null, why: null } : plainly(() => takenApart(series, length, method, options));
  await context.breathe();
  const untrended = parts === null ? series : withValues(series, series.values.map((v, t) => method === "multiplicative" ? v / parts.trend.values[t] : v - parts.trend.values[t]));
  const line = polynomialTrend(series.values, 1), straight = series.values.map((v, t) => v - line(t));
  return {
    of: scaleText(series), axis: axisTitle(series), series, method, length,
    trend: parts?.trend ?? null, seasonal: parts?.seasonal ?? null, remainder: parts?.remainder ?? null,
    strength: length === null ? null : seasonalStrength(series, length),
    positions: length === null ? [] : subseries(untrended, length), labels: length === null ? [] : seasonLabels(series, length),
    spectrum: spectrum(straight, { level, smooth: twice(series.n) }), cumulativePeriodogram: cumulativePeriodogram(straight, 0, level),
    notes: [
      ...(usual === null ? ["Its spacing names no season, and no length was given: there is a spectrum, and nothing to take apart."] : []),
      ...(usual !== null && length === null ? [`${series.n} values are fewer than two seasons of ${usual} periods: there is nothing to take apart.`] : []),
      ...(why === null ? [] : [`The series could not be taken apart: ${why}.`]),
    ],
  };
}

/** Two averages one after another: their weights fall off to the sides, so that a cycle shows as a peak and not as a plateau. */
function twice(n: number): number[] {
  const half = Math.max(1, Math.round(Math.sqrt(n) / 4));
  return 4 * half < n ? [half, half] : [half];
}

interface Pieces { readonly trend: Series; readonly seasonal: Series; readonly remainder: Series }

function takenApart(series: Series, length: number, method: Decomposed["method"], options: DecompositionCell): { readonly parts: Pieces | null; readonly why: string | null } {
  const { seasonalWindow = 7, robust = false } = options;
  const found = method === "stl" ? stl(series, { length, seasonalWindow, robust }) : decompose(series, { length, kind: method });
  if (found.status !== "ok") return { parts: null, why: found.note ?? "the data cannot answer" };
  const part = (name: "trend" | "seasonal" | "remainder"): Series => withValues(series, found[name], { name: `${name} of ${series.name || "the series"}` });
  return { parts: { trend: part("trend"), seasonal: part("seasonal"), remainder: part("remainder") }, why: null };
}
