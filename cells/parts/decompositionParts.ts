// What a decomposition shows: how strong the season is and where it is highest, the pieces, the season position by
// position, and the rhythms by frequency.

import { timesMs, type CumulativePeriodogram, type SeasonalStrength, type Series, type Spectrum, type Subseries } from "../../stdlib/index.ts";
import { panelChart } from "./panelChart.ts";
import { details } from "./part.ts";
import type { ChartPart, Part, TextPart } from "./part.ts";
import { pathChart } from "./pathChart.ts";
import type { SeasonLabel } from "./seasonLabels.ts";
import { spectrumChart } from "./spectrumChart.ts";
import { subseriesChart } from "./subseriesChart.ts";
import { capital, figure, listOf, percent } from "./words.ts";

/** Cycles that are named. */
const mostRhythms = 3;

interface Shown {
  readonly of: string; readonly axis: string; readonly series: Series; readonly method: string; readonly length: number | null;
  readonly trend: Series | null; readonly seasonal: Series | null; readonly remainder: Series | null;
  readonly strength: SeasonalStrength | null; readonly positions: readonly Subseries[]; readonly labels: readonly SeasonLabel[];
  readonly spectrum: Spectrum; readonly cumulativePeriodogram: CumulativePeriodogram; readonly notes: readonly string[];
}

export function decompositionParts(result: Shown, width: number): readonly Part[] {
  const said = [...(result.strength === null ? [] : [result.strength.sentence]), ...positionsText(result)].join(" ");
  return [
    ...(said === "" ? [] : [{ part: "text" as const, text: said }]),
    ...pieces(result, width, said),
    ...seasonPart(result, width),
    ...result.notes.map((text): TextPart => ({ part: "text", tone: "note", text })),
    ...spectrumParts(result, width),
    ...details(rhythmPart(result, width)),
  ];
}

/** Where the season is highest and lowest, on average. */
function positionsText({ positions, labels, series, method, trend }: Shown): string[] {
  const known = positions.map((one, p) => ({ mean: one.mean, label: labels[p].label })).filter(one => !Number.isNaN(one.mean));
  if (known.length < 2) return [];
  const high = known.reduce((a, b) => b.mean > a.mean ? b : a), low = known.reduce((a, b) => b.mean < a.mean ? b : a);
  const unit = method === "multiplicative" || series.unit === "" ? "" : ` ${series.unit}`;
  const size = (mean: number): string => method === "multiplicative" && trend !== null ? `${percent(mean - 1)} of the trend` : `${figure(mean)}${unit}`;
  const signed = (mean: number): string => (trend === null ? size(mean) : `${mean - (method === "multiplicative" ? 1 : 0) > 0 ? "+" : ""}${size(mean)}`);
  return [`On average it is highest at ${high.label} (${signed(high.mean)}) and lowest at ${low.label} (${signed(low.mean)})${trend === null ? "" : ", against the trend"}.`];
}

function pieces(result: Shown, width: number, said: string): readonly ChartPart[] {
  const { trend, seasonal, remainder, series } = result;
  if (trend === null || seasonal === null || remainder === null) return [];
  const time = timesMs(series), how = result.method === "stl" ? "by loess (STL)" : `by moving averages, ${result.method}`;
  return [panelChart({
    title: `${capital(result.of)} taken apart ${how}`, alt: said || `Trend, season and remainder of ${result.of}.`, dated: series.every !== null, width,
    panels: [{ title: result.axis, time, value: series.values }, { title: "trend", time, value: trend.values }, { title: "season", time, value: seasonal.values }, { title: "remainder", time, value: remainder.values }],
  })];
}

function seasonPart(result: Shown, width: number): readonly ChartPart[] {
  const { positions, labels, trend, method, series } = result;
  if (positions.length === 0) return [];
  const what = trend === null ? result.axis : method === "multiplicative" ? "share of the trend" : `against the trend${series.unit ? ` (${series.unit})` : ""}`;
  const alt = `${positionsText(result)[0] ?? "No position of the season is observed."} Each line is one position through time, the rule its mean.`;
  return [subseriesChart("The season, position by position", alt, what, positions, labels, width)];
}

function spectrumParts(result: Shown, width: number): readonly Part[] {
  const { spectrum } = result;
  if (spectrum.status !== "ok") return [{ part: "text", tone: "note", text: `No spectrum: ${spectrum.note}.` }];
  const unit = result.series.unit;
  return [spectrumChart(`Spectrum of ${result.of}, less a straight line`, rhythmsText(spectrum), unit, spectrum, result.length, width)];
}

/** The strongest cycles with their shares of the variation. */
function rhythmsText({ frequency, raw }: Spectrum): string {
  const whole = raw.reduce((a, b) => a + b, 0), share = (j: number): number => raw[j] / whole;
  const top = Array.from(raw.keys()).sort((a, b) => raw[b] - raw[a]).slice(0, mostRhythms).filter((j, rank) => rank === 0 || share(j) >= 0.05);
  const cycles = top.map(j => `one cycle in ${figure(1 / frequency[j])} periods (${percent(share(j), 0)} of the variation)`);
  return `Strongest in the periodogram: ${listOf(cycles)}. One that is highest there always is; Bartlett's test below says whether the whole differs from white noise.`;
}

function rhythmPart(result: Shown, width: number): readonly ChartPart[] {
  const { frequency, cumulative, limit, sentence } = result.cumulativePeriodogram;
  if (frequency === undefined || cumulative === undefined || limit === undefined) return [];
  const line = Array.from(frequency, (_, j) => (j + 1) / frequency.length);
  return [pathChart({
    width,
    title: "Share of the variation at slower frequencies (Bartlett's test)", alt: sentence ?? "The running share of variation by frequency.", axis: "running share of variation",
    xField: { type: "quantitative", title: "frequency (cycles a period)", scale: { nice: false, zero: true }, axis: { grid: false } },
    path: { x: frequency, value: cumulative, low: line.map(at => Math.max(0, at - limit)), high: line.map(at => Math.min(1, at + limit)) },
  })];
}
