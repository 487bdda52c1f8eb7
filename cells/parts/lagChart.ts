// Statistics by lag as stems, in panels one above another on one lag axis, each with its band.

import type { ChartPart, Columns } from "./part.ts";

export interface LagPanel {
  /** Axis title: "autocorrelation". */
  readonly title: string;
  /** Value at lag `from + i`. */
  readonly values: ArrayLike<number>;
  readonly from: number;
  /** Half width of the band at the same lags; left out where there is none. */
  readonly band?: ArrayLike<number>;
  /** A second set of values drawn as a line of marks (the model's own). */
  readonly theory?: ArrayLike<number>;
}

const panelHeight = 130;
/** Room between panels, as a share of a panel's height. */
const gap = 0.2;

/** @param season  season length in lags, marked by guide lines; 0 for none
 *  @param guides  further lags to mark */
export function lagChart(given: {
  readonly title: string; readonly alt: string; readonly panels: readonly LagPanel[]; readonly season: number; readonly guides?: readonly number[]; readonly lagTitle?: string;
}): ChartPart {
  const { panels } = given;
  const data: Record<string, Columns> = {};
  const layers = panels.flatMap((panel, i) => {
    const key = `panel${i + 1}`;
    data[key] = stems(panel);
    data[`${key}Band`] = bandColumns(panel);
    data[`${key}Theory`] = theoryColumns(panel);
    return panelLayers(panel.title, key, i, panels.length, given.lagTitle ?? "lag (periods)");
  });
  const last = Math.max(...panels.map(panel => panel.from + panel.values.length - 1));
  data.seasons = { lag: [...seasonLags(given.season, last), ...(given.guides ?? [])] };
  return {
    part: "chart", title: given.title, alt: given.alt, height: panels.length * panelHeight * (1 + gap) + 40,
    spec: {
      resolve: { scale: { y: "independent" }, axis: { y: "independent" } },
      layer: [
        { data: { name: "seasons" }, mark: { type: "rule", style: "guide", strokeDash: [2, 3] }, encoding: { x: lagField(given.lagTitle ?? "lag (periods)") } },
        ...layers,
      ],
    },
    data,
    full: { correlations: table(panels) },
  };
}

/** All panels as one table by lag. */
function table(panels: readonly LagPanel[]): Columns {
  const from = Math.min(...panels.map(panel => panel.from));
  const end = Math.max(...panels.map(panel => panel.from + panel.values.length));
  const lags = Array.from({ length: Math.max(0, end - from) }, (_, i) => from + i);
  const at = (values: ArrayLike<number> | undefined, panel: LagPanel): number[] => lags.map(lag => values?.[lag - panel.from] ?? NaN);
  return Object.fromEntries([
    ["lag", lags],
    ...panels.flatMap(panel => [
      [panel.title, at(panel.values, panel)], ...(panel.band === undefined ? [] : [[`band of the ${panel.title}`, at(panel.band, panel)]]),
      ...(panel.theory === undefined ? [] : [[`${panel.title} of the model`, at(panel.theory, panel)]]),
    ]),
  ]) as Columns;
}

function lagField(title: string): Record<string, unknown> {
  return { field: "lag", type: "quantitative", title, scale: { nice: false, zero: false, padding: 8 }, axis: { grid: false, tickMinStep: 1, tickCount: 12, format: "d" } };
}

/** One panel is a layer whose vertical scale covers its own strip of the picture. */
function panelLayers(title: string, key: string, index: number, panels: number, lagTitle: string): readonly Record<string, unknown>[] {
  const share = 1 / (panels + (panels - 1) * gap);
  const top = index * (1 + gap) * share;
  const scale = { range: [{ expr: `height * ${top + share}` }, { expr: `height * ${top}` }], zero: true, nice: true };
  const y = { type: "quantitative", title, scale, axis: { orient: "left", tickCount: 4, grid: false, minExtent: 40, titleAnchor: "middle" } };
  const x = lagField(lagTitle);
  const tooltip = [{ field: "lag", type: "quantitative", title: "lag" }, { field: "value", type: "quantitative", title, format: ".3f" }];
  return [{
    layer: [
      { data: { name: `${key}Band` }, mark: { type: "area", style: "band" }, encoding: { x, y: { ...y, field: "low" }, y2: { field: "high" } } },
      { data: { name: key }, mark: { type: "rule", style: "mark", tooltip: true }, encoding: { x, y: { ...y, field: "zero" }, y2: { field: "value" }, tooltip } },
      { data: { name: key }, transform: [{ filter: { field: "outside", equal: false } }], mark: { type: "point", style: "mark", filled: true, size: 26, opacity: 1 }, encoding: { x, y: { ...y, field: "value" }, tooltip } },
      { data: { name: key }, transform: [{ filter: { field: "outside", equal: true } }], mark: { type: "point", style: "outside", shape: "diamond", filled: true, size: 62, opacity: 1 }, encoding: { x, y: { ...y, field: "value" }, tooltip } },
      { data: { name: `${key}Theory` }, mark: { type: "line", style: "model", point: false }, encoding: { x, y: { ...y, field: "value" } } },
    ],
  }];
}

function stems(panel: LagPanel): Columns {
  const size = panel.values.length;
  const lags = Array.from({ length: size }, (_, i) => panel.from + i);
  const values = Array.from(panel.values);
  const band = panel.band;
  return {
    lag: lags, value: values, zero: lags.map(() => 0),
    outside: values.map((value, i) => band !== undefined && Math.abs(value) > band[i]),
  };
}

function bandColumns(panel: LagPanel): Columns {
  const band = panel.band === undefined ? [] : Array.from(panel.band);
  return { lag: band.map((_, i) => panel.from + i), low: band.map(width => -width), high: band };
}

function theoryColumns(panel: LagPanel): Columns {
  const values = panel.theory === undefined ? [] : Array.from(panel.theory);
  return { lag: values.map((_, i) => panel.from + i), value: values };
}

function seasonLags(season: number, last: number): readonly number[] {
  if (season < 2) return [];
  return Array.from({ length: Math.floor(last / season) }, (_, i) => (i + 1) * season);
}
