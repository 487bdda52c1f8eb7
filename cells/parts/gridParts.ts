// What a grid of orders shows: the finding, the surface of orders as tiles, the ranking with ties, what failed and why.

import type { Grid, Lags, Stepwise } from "../../stdlib/index.ts";
import { heatChart, type Tile } from "./heatChart.ts";
import { details } from "./part.ts";
import type { ChartPart, Part, TablePart, TextPart } from "./part.ts";
import { searchChart } from "./searchChart.ts";
import { count, decimals, figure } from "./words.ts";

const mostRows = 20;
const mostTiles = 12;

export function gridParts(grid: Grid | Stepwise): readonly Part[] {
  return [
    { part: "text", text: grid.sentence },
    ...grid.notes.map((text): TextPart => ({ part: "text", tone: /^Stopped early|caution|could not/.test(text) ? "caution" : "note", text })),
    ...("path" in grid ? pathParts(grid) : surfaces(grid)),
    ...(grid.models.length > 0 ? [rankingTable(grid)] : []),
    ...details([...cautionsTable(grid), ...(grid.failures.length > 0 ? [failureTable(grid)] : [])]),
  ];
}

function criterionName(rankedBy: Grid["rankedBy"]): string {
  return { aic: "AIC", aicc: "AICc", bic: "BIC" }[rankedBy];
}

/** The way of a stepwise search: what was tried from where, and where it moved. */
function pathParts(grid: Stepwise): readonly Part[] {
  const name = criterionName(grid.rankedBy);
  const moves = grid.path.filter(step => step.moved);
  const alt = `The search tried ${count(grid.path.length, "model")} and moved ${count(moves.length, "time")}: ${moves.map(step => `${step.label} (${decimals(step.value, 1)})`).join(", then ")}.`;
  return [searchChart(`The way of the search: ${name} of each model tried`, alt, name, grid.path), { part: "text", text: alt }];
}

/** One surface of the plain orders, and one of the seasonal ones, each tile the best over the other pair. */
function surfaces(grid: Grid): readonly ChartPart[] {
  const name = criterionName(grid.rankedBy);
  const plain = surface(grid, row => row.ma, row => row.ar);
  const seasonal = surface(grid, row => row.seasonalMa, row => row.seasonalAr);
  const bothVary = plain !== null && seasonal !== null;
  const parts: ChartPart[] = [];
  if (plain !== null) parts.push(heatChart({ title: `Order surface: how far ${name} stands behind the best${bothVary ? ", each tile with its best seasonal orders" : ""}`, alt: altOf(plain, "MA", "AR"), across: "MA lags", up: "AR lags", tiles: plain }));
  if (seasonal !== null) parts.push(heatChart({ title: `Seasonal orders: how far ${name} stands behind the best${bothVary ? ", each tile with its best plain orders" : ""}`, alt: altOf(seasonal, "seasonal MA", "seasonal AR"), across: "seasonal MA lags", up: "seasonal AR lags", tiles: seasonal }));
  return parts;
}

/** Null where the pair of orders does not vary, or varies too widely to be read as tiles. */
function surface(grid: Grid, across: (row: Grid["models"][number]) => Lags, up: (row: Grid["models"][number]) => Lags): readonly Tile[] | null {
  const columns = distinct(grid.models.map(across)), rows = distinct(grid.models.map(up));
  if (columns.length * rows.length < 2 || columns.length > mostTiles || rows.length > mostTiles) return null;
  const best = new Map<string, Tile>();
  for (const model of grid.models) {
    const column = lagsText(across(model)), row = lagsText(up(model));
    const key = `${column}|${row}`, known = best.get(key), ranks = model.setAside === null || grid.best?.setAside !== null;
    if (known === undefined || Number.isNaN(known.difference) || model.difference < known.difference) best.set(key, { column, row, difference: ranks ? model.difference : NaN, word: "set aside", remark: model.label });
  }
  // A pair without a model was tried and failed: its tile says so instead of being left out.
  return rows.flatMap(row => columns.map(column => best.get(`${column}|${row}`) ?? { column, row, difference: NaN, remark: "could not be estimated" }));
}

function distinct(list: readonly Lags[]): readonly string[] {
  const texts = new Map(list.map(lags => [lagsText(lags), typeof lags === "number" ? lags : lags.length + 0.5]));
  return Array.from(texts.entries()).sort((a, b) => a[1] - b[1]).map(([text]) => text);
}

function lagsText(lags: Lags): string {
  return typeof lags === "number" ? String(lags) : lags.join(", ") || "0";
}

function altOf(tiles: readonly Tile[], across: string, up: string): string {
  const sorted = tiles.filter(tile => !Number.isNaN(tile.difference)).sort((a, b) => a.difference - b.difference);
  const [best] = sorted;
  const ties = sorted.filter(tile => tile.difference > 0 && tile.difference <= 2).length;
  return `The smallest is at ${up} ${best.row} and ${across} ${best.column}; ${ties === 0 ? "no other tile is" : `${count(ties, "other tile")} ${ties === 1 ? "is" : "are"}`} within 2 of it; the farthest is ${figure(sorted[sorted.length - 1].difference)} behind.`;
}

function rankingTable(grid: Grid): TablePart {
  const name = criterionName(grid.rankedBy);
  const shown = grid.models.slice(0, mostRows);
  return {
    part: "table", title: `Ranked by ${name}`,
    columns: [
      { title: "place", align: "right", format: "d" }, { title: "model" }, { title: "behind the best", align: "right", format: ",.1f" },
      { title: "weight", align: "right", format: ".1%" }, { title: "free parameters", align: "right", format: "d" }, { title: "reading" },
    ],
    rows: shown.map(row => [
      row.setAside === null ? row.rank : NaN, row.label, row.difference, row.weight, row.k, row.setAside === null ? readingOf(row.difference, row.tied) : "set aside",
    ]),
    marked: shown.flatMap((row, i) => (row === grid.best ? [{ row: i, word: "best" }] : [])),
    note: `${grid.models.length > shown.length ? `The first ${shown.length} of ${grid.models.length}. ` : ""}Weights are Akaike weights among the models tried. All ${count(grid.models.length, "model")} saw the same ${count(grid.models[0].n, "observation")}; only differences of ${name} mean anything.`,
  };
}

/** What the fits' own flags say, a model a row: too long to stand in the ranking. */
function cautionsTable(grid: Grid): readonly TablePart[] {
  const rows = grid.models.slice(0, mostRows).flatMap(row => [...(row.setAside === null ? [] : [[row.label, `set aside: ${row.setAside}`]]), ...row.cautions.map(text => [row.label, text])]);
  return rows.length === 0 ? [] : [{ part: "table", title: "Cautions", columns: [{ title: "model" }, { title: "caution" }], rows }];
}

function readingOf(difference: number, tied: boolean): string {
  if (difference === 0) return "smallest";
  if (tied) return "tied with the smallest";
  if (difference <= 7) return "some support";
  return difference <= 10 ? "little support" : "next to no support";
}

function failureTable(grid: Grid): TablePart {
  const shown = grid.failures.slice(0, mostRows);
  return {
    part: "table", title: "Could not be estimated", columns: [{ title: "model" }, { title: "reason" }],
    rows: shown.map(one => [one.label, one.reason]),
    ...(grid.failures.length > shown.length ? { note: `The first ${shown.length} of ${grid.failures.length}.` } : {}),
  };
}
