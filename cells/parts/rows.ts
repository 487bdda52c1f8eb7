// Whatever an author gives as rows (a list of objects, columns, a series, a forecast, numbers) as named columns.

import { isSeries, milliseconds, timesMs, type Forecast, type Series } from "../../stdlib/index.ts";

export type Cell = number | string | boolean | null;

/** Named columns of one length. `times` names the columns whose numbers are UTC milliseconds. */
export interface Rows {
  readonly columns: Readonly<Record<string, readonly Cell[] | Float64Array>>;
  readonly n: number;
  readonly times: readonly string[];
}

/** @throws RangeError in words where the value cannot be read as rows */
export function rowsOf(value: unknown): Rows {
  if (isSeries(value)) return seriesRows(value);
  if (isForecast(value)) return forecastRows(value);
  if (isList(value)) return listRows(Array.from(value));
  if (typeof value === "object" && value !== null) return objectRows(value as Readonly<Record<string, unknown>>);
  throw new RangeError(`expected rows: a list of objects, a series or a forecast; found ${typeof value === "string" ? `the text "${value}"` : String(value)}`);
}

function isForecast(value: unknown): value is Forecast {
  return typeof value === "object" && value !== null && "median" in value && "bands" in value && "history" in value && "horizon" in value;
}

function isList(value: unknown): value is ArrayLike<unknown> {
  return Array.isArray(value) || (ArrayBuffer.isView(value) && !(value instanceof DataView));
}

/** A series: `time` (UTC milliseconds; the number where it is only numbered), `period` (ISO 8601 text), `value`, `series` (its name). */
function seriesRows(series: Series): Rows {
  const columns = { time: timesMs(series), period: series.times, value: series.values, series: series.times.map(() => series.name) };
  return { columns, n: series.n, times: series.every === null ? [] : ["time"] };
}

/** A forecast: `time`, `period`, `mean`, `median`, `se`, and `low90`, `high90` for each band. */
function forecastRows(forecast: Forecast): Rows {
  const n = forecast.horizon;
  const start = forecast.times[0];
  const percent = (level: number): string => String(Number((level * 100).toPrecision(6)));
  const bands = forecast.bands.flatMap((band) => [[`low${percent(band.level)}`, band.low], [`high${percent(band.level)}`, band.high]] as const);
  const columns = { time: milliseconds(start, forecast.every, n), period: forecast.times, mean: forecast.mean, median: forecast.median, se: forecast.se, ...Object.fromEntries(bands) };
  return { columns, n, times: forecast.every === null ? [] : ["time"] };
}

function listRows(list: readonly unknown[]): Rows {
  if (list.length === 0) return { columns: {}, n: 0, times: [] };
  if (list.every((item) => isSeries(item))) return stacked(list.map((series, i) => [(series as Series).name || `series ${i + 1}`, series as Series]));
  if (list.every((item) => typeof item === "number")) return { columns: { index: list.map((_, i) => i + 1), value: list as number[] }, n: list.length, times: [] };
  if (list.every((item) => typeof item === "string" || typeof item === "boolean")) return { columns: { value: list as Cell[] }, n: list.length, times: [] };
  const odd = list.findIndex((item) => typeof item !== "object" || item === null || isList(item));
  if (odd >= 0) throw new RangeError(`row ${odd + 1} is ${isList(list[odd]) ? "a list" : String(list[odd])}, where an object such as {name: value} belongs`);
  const names = [...new Set(list.flatMap((row) => Object.keys(row as object)))];
  const columns = Object.fromEntries(names.map((name) => [name, list.map((row) => cellOf((row as Record<string, unknown>)[name]))]));
  return { columns, n: list.length, times: [] };
}

function objectRows(value: Readonly<Record<string, unknown>>): Rows {
  const entries = Object.entries(value);
  if (entries.length > 0 && entries.every(([, item]) => isSeries(item))) return stacked(entries as [string, Series][]);
  const lists = entries.filter(([, item]) => isList(item)) as [string, ArrayLike<unknown>][];
  if (lists.length > 0 && lists.length === entries.length) {
    const n = lists[0][1].length;
    const short = lists.find(([, list]) => list.length !== n);
    if (short !== undefined) throw new RangeError(`column ${short[0]} has ${short[1].length} items and ${lists[0][0]} has ${n}; columns must be of one length`);
    return { columns: Object.fromEntries(lists.map(([name, list]) => [name, list instanceof Float64Array ? list : Array.from(list, cellOf)])), n, times: [] };
  }
  return listRows([value]); // one object is one row
}

/** Several series one below the other, told apart by `series`. */
function stacked(entries: readonly (readonly [string, Series])[]): Rows {
  const all = entries.map(([name, series]) => ({ name, rows: seriesRows(series) }));
  const join = (key: "time" | "value"): Float64Array => Float64Array.from(all.flatMap(({ rows }) => Array.from(rows.columns[key] as Float64Array)));
  const columns = {
    time: join("time"), period: entries.flatMap(([, series]) => series.times), value: join("value"),
    series: all.flatMap(({ name, rows }) => Array.from({ length: rows.n }, () => name)),
  };
  return { columns, n: columns.time.length, times: entries.every(([, s]) => s.every !== null) ? ["time"] : [] };
}

/** One cell of a row: figures, texts and truths; a model or another object by its label. */
export function cellOf(value: unknown): Cell {
  if (value === undefined || value === null) return null;
  if (typeof value === "number" || typeof value === "string" || typeof value === "boolean") return value;
  if (typeof value === "object" && "label" in value && typeof value.label === "string") return value.label;
  if (isList(value)) return Array.from(value).every((v) => typeof v === "number" || typeof v === "string") ? Array.from(value).join(", ") : `a list of ${value.length}`;
  return isSeries(value) ? `a series of ${value.n}` : "an object";
}

