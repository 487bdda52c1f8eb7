// What a notebook's own Vega-Lite view may say: everything that describes, nothing that fetches, links or runs code.

import { OptionError } from "../kind.ts";
import { isSeries, parsePeriod, startMs } from "../../stdlib/index.ts";
import type { Columns } from "./part.ts";
import { rowsOf, type Rows } from "./rows.ts";

type Spec = Readonly<Record<string, unknown>>;

/** Top-level properties that are read. */
const topProperties: readonly string[] = [
  "data", "mark", "encoding", "layer", "transform", "params", "title", "description", "width", "height", "resolve", "projection", "config",
  "hconcat", "vconcat", "concat", "facet", "repeat", "spec", "columns", "spacing", "align", "bounds", "center", "padding", "autosize", "view", "name", "background",
];

const marks = ["arc", "area", "bar", "boxplot", "circle", "errorband", "errorbar", "geoshape", "line", "point", "rect", "rule", "square", "text", "tick", "trail"];
const channels = [
  "x", "y", "x2", "y2", "xOffset", "yOffset", "xError", "xError2", "yError", "yError2", "theta", "theta2", "radius", "radius2", "longitude", "latitude", "longitude2", "latitude2",
  "color", "fill", "stroke", "opacity", "fillOpacity", "strokeOpacity", "strokeWidth", "strokeDash", "size", "angle", "shape", "text", "tooltip", "detail", "order", "key", "facet", "row", "column", "description", "time",
];

/** Keys that hold code or reach outside, with what to do instead. */
const refused: Readonly<Record<string, string>> = {
  url: "a chart reads its rows from the notebook: load the file in a `load` cell and name it in `data`",
  href: "a chart has no links; put the link into the prose",
  bind: "move the chart by a `slider`, `choice` or `switch` cell, whose name can stand in any option",
  expr: "compute it in a `values` cell and write the name here",
  signal: "compute it in a `values` cell and write the name here",
  calculate: "compute the column in the rows, as in rows.map(row => ({...row, ratio: row.a / row.b}))",
  labelExpr: "use `format`, or put the labels into the rows",
  usermeta: "it has no meaning here",
  datasets: "name the rows in `data`",
  loader: "it has no meaning here",
  transformExpr: "compute it in a `values` cell",
};

/** Numbers that say how much is made, and how much a page draws without standing still. */
const most: Readonly<Record<string, number>> = { steps: 10_000, maxbins: 1000, tickCount: 1000 };
const mostListed = 10_000;

/** A view ready to be drawn: the specification without its data, and the data by name.
 *  @throws OptionError naming the top-level option at fault */
export function readView(options: Spec): { readonly spec: Spec; readonly data: Readonly<Record<string, Rows>> } {
  for (const name of Object.keys(options)) {
    if (topProperties.includes(name) || name === "$schema") continue;
    throw new OptionError(name, refused[name] !== undefined ? `\`${name}\` is not taken: ${refused[name]}` : `\`chart\` has no option \`${name}\`: its options are the top-level properties of a Vega-Lite specification, such as data, mark, encoding, layer, title`);
  }
  const data: Record<string, Rows> = {};
  const spec: Record<string, unknown> = {};
  const { $schema: _schema, ...rest } = options;
  for (const [name, value] of Object.entries(rest)) {
    spec[name] = name === "data" ? { name: keep(value, data, "data") } : inside(value, name, name, data, name);
  }
  if (!["mark", "layer", "hconcat", "vconcat", "concat", "spec"].some((name) => name in spec)) throw new OptionError("mark", "`chart` needs a `mark`, such as mark: \"line\", or `layer`");
  if (Object.keys(data).length === 0) throw new OptionError("data", "`chart` needs `data`: the name of a series, a forecast or rows, at the top or in each layer");
  const typed = typedView(spec, data, [spec["data"]]) as Spec;
  return { spec: sized(typed), data };
}

/** The columns of a data set as a chart part holds them. */
export function chartColumns(rows: Rows): Columns {
  return rows.columns;
}

function keep(value: unknown, data: Record<string, Rows>, option: string): string {
  const count = Object.keys(data).length;
  const name = count === 0 ? "rows" : `rows${count + 1}`;
  try {
    const rows = withTimes(rowsOf(plainData(value)));
    // Two layers of one series or forecast share its columns.
    const same = Object.entries(data).find(([, one]) => one.n === rows.n && Object.keys(rows.columns).length > 0 && sameColumns(one, rows));
    if (same !== undefined) return same[0];
    data[name] = rows;
  } catch (error) {
    if (error instanceof RangeError) throw new OptionError(option, `\`data\`: ${error.message}`);
    throw error;
  }
  return name;
}

function sameColumns(a: Rows, b: Rows): boolean {
  const names = Object.keys(a.columns);
  return names.length === Object.keys(b.columns).length && names.every((name) => {
    const x = a.columns[name], y = b.columns[name];
    if (x === y) return true;
    if (y === undefined || x.length !== y.length) return false;
    for (let i = 0; i < x.length; i++) if (!Object.is(x[i], y[i])) return false;
    return true;
  });
}

/** `{values: rows}` is Vega-Lite's own way of giving rows. */
function plainData(value: unknown): unknown {
  if (typeof value === "object" && value !== null && !isSeries(value) && !Array.isArray(value)) {
    const object = value as Record<string, unknown>;
    if ("url" in object) throw new RangeError(refused["url"]);
    if (Object.keys(object).length === 1 && "values" in object) return object["values"];
  }
  return value;
}

/** Columns of ISO 8601 texts are times as well: a column beside them, in milliseconds, is what the axis takes. */
function withTimes(rows: Rows): Rows {
  const times = [...rows.times];
  const columns: Record<string, Rows["columns"][string]> = { ...rows.columns };
  for (const [name, column] of Object.entries(columns)) {
    if (name === "period" || column instanceof Float64Array || column.length === 0 || typeof column[0] !== "string") continue;
    const ms = column.map(millisecondsOf);
    if (ms.every((v) => v !== null)) { columns[name] = Float64Array.from(ms as number[]); times.push(name); }
  }
  return { ...rows, columns, times };
}

function millisecondsOf(cell: unknown): number | null {
  if (typeof cell !== "string" || !/^[+-]?\d{4,6}-/.test(cell)) return null;
  try {
    const p = parsePeriod(cell);
    return p === null ? null : startMs(p);
  } catch (error) {
    if (error instanceof RangeError) return null; // of the form of a date, but none: it stays a text
    throw error;
  }
}

/** Walks a specification, refusing what reaches outside or is code, and taking inner data out. */
function inside(value: unknown, key: string, option: string, data: Record<string, Rows>, path: string): unknown {
  if (typeof value === "function") throw new OptionError(option, `\`${path}\` is a function; a chart is described by plain data`);
  if (isSeries(value)) throw new OptionError(option, `\`${path}\` is a series; series stand in \`data\``);
  if ((Array.isArray(value) || ArrayBuffer.isView(value)) && (value as ArrayLike<unknown>).length > mostListed) throw new OptionError(option, `\`${path}\` has ${(value as ArrayLike<unknown>).length} items; up to ${mostListed} are taken outside \`data\``);
  if (Array.isArray(value)) return value.map((item, i) => inside(item, key, option, data, `${path}[${i}]`));
  if (ArrayBuffer.isView(value)) return Array.from(value as unknown as ArrayLike<number>);
  if (typeof value === "string") { checkText(value, key, option, path); return value; }
  if (typeof value !== "object" || value === null) return value;
  const result: Record<string, unknown> = {};
  for (const [name, inner] of Object.entries(value)) {
    if (Object.hasOwn(refused, name)) throw new OptionError(option, `\`${path}.${name}\` is not taken: ${refused[name]}`);
    if (typeof inner === "number" && Object.hasOwn(most, name) && !(inner <= most[name])) throw new OptionError(option, `\`${path}.${name}\` is ${inner}; up to ${most[name]} are drawn`);
    if (name === "keyvals" && !Array.isArray(inner)) throw new OptionError(option, `\`${path}.keyvals\` is taken as a list only; complete the rows in the notebook`);
    if (name === "data") { result[name] = { name: keep(inner, data, option) }; continue; }
    result[name] = inside(inner, listKey(name, key), option, data, `${path}.${name}`);
  }
  if ("mark" in result && key !== "config") checkMark(result["mark"], option, `${path}.mark`);
  return result;
}

/** Inside `filter`, lists under and, or, not still hold conditions. */
function listKey(name: string, key: string): string {
  return (name === "and" || name === "or" || name === "not") && (key === "filter" || key === "test") ? key : name;
}

function checkText(value: string, key: string, option: string, path: string): void {
  if (key === "filter" || key === "test") throw new OptionError(option, `\`${path}\` is code in a text; write a condition as an object, as in {field: "value", gt: 10}, or filter the rows themselves`);
  // A regression's or loess's `on` names a field.
  const namesField = key === "on" && /(^|\.)transform\[\d+\]\.on$/.test(path);
  if (!namesField && (key === "on" || key === "clear" || key === "events") && !/^(click|dblclick|pointerover|pointerout|pointermove|pointerdown|pointerup|mouseover|mouseout|mousemove)$/.test(value)) throw new OptionError(option, `\`${path}\` may name one event, such as "click"`);
  if (key === "mark" || path === "mark") checkMark(value, option, path);
  if (key === "type" && value === "image") throw new OptionError(option, `\`${path}\` is "image", which reads pictures from elsewhere; choose another mark`);
}

function checkMark(mark: unknown, option: string, path: string): void {
  const type = typeof mark === "object" && mark !== null ? (mark as Spec)["type"] : mark;
  if (typeof type === "string" && !marks.includes(type)) throw new OptionError(option, `\`${path}\` is "${type}", which is no mark; choose one of ${marks.join(", ")}`);
}

/** Fills in what an author need not say: types of the fields from their columns, and times in UTC. */
function typedView(view: unknown, data: Readonly<Record<string, Rows>>, above: readonly unknown[]): unknown {
  if (typeof view !== "object" || view === null || Array.isArray(view)) return view;
  const spec = view as Record<string, unknown>;
  const own = "data" in spec ? spec["data"] : above[above.length - 1];
  const rows = data[String((own as Spec | undefined)?.["name"])] as Rows | undefined;
  const result: Record<string, unknown> = { ...spec };
  const derived = "transform" in spec || above.includes("transform") || "repeat" in spec || above.includes("repeat");
  if (typeof spec["encoding"] === "object" && spec["encoding"] !== null) {
    result["encoding"] = Object.fromEntries(Object.entries(spec["encoding"]).map(([channel, def]) => {
      if (!channels.includes(channel)) throw new OptionError("encoding", `\`encoding.${channel}\` is no channel; there are ${channels.slice(0, 4).join(", ")}, color, size, shape, opacity, text, tooltip, row, column and others`);
      return [channel, Array.isArray(def) ? def.map((one) => typedField(one, channel, rows, derived)) : typedField(def, channel, rows, derived)];
    }));
  }
  const trail = [...above.filter((one) => typeof one === "string"), ...("transform" in spec ? ["transform"] : []), ...("repeat" in spec ? ["repeat"] : []), own];
  for (const name of ["layer", "hconcat", "vconcat", "concat"]) if (Array.isArray(spec[name])) result[name] = spec[name].map((one: unknown) => typedView(one, data, trail));
  if ("spec" in spec) result["spec"] = typedView(spec["spec"], data, trail);
  return result;
}

function typedField(def: unknown, channel: string, rows: Rows | undefined, derived: boolean): unknown {
  if (typeof def !== "object" || def === null || !("field" in def) || typeof def.field !== "string") return def;
  const field = def as Record<string, unknown> & { field: string };
  const column = rows?.columns[field.field];
  if (column === undefined) {
    if (rows !== undefined && !derived && rows.n > 0) throw new OptionError("encoding", `\`encoding.${channel}\`: the data have no field "${field.field}"; they have ${Object.keys(rows.columns).join(", ")}`);
    return field;
  }
  const isTime = rows?.times.includes(field.field) === true;
  const result: Record<string, unknown> = { ...field };
  const positional = channel === "x" || channel === "y";
  if (!("type" in field) && !("aggregate" in field) && !("bin" in field) && !["x2", "y2"].includes(channel)) {
    result["type"] = isTime ? "temporal" : column instanceof Float64Array || typeof column.find((cell: unknown) => cell !== null) === "number" ? "quantitative" : "nominal";
  }
  if (typeof field["timeUnit"] === "string" && !field["timeUnit"].startsWith("utc")) result["timeUnit"] = `utc${field["timeUnit"]}`;
  if (isTime && positional && result["type"] === "temporal" && !("timeUnit" in field) && field["scale"] !== null) {
    result["scale"] = { type: "utc", ...(typeof field["scale"] === "object" ? field["scale"] : {}) };
  }
  if (isTime && positional && !("title" in field) && field.field === "time") result["title"] = null;
  // Groups stand in the order of the rows, which an author chose, not of the alphabet.
  if (result["type"] === "nominal" && !("sort" in field)) {
    if (positional) result["sort"] = null;
    else if (["row", "column", "facet"].includes(channel)) result["sort"] = [...new Set(Array.from<unknown>(column))];
  }
  if (isTime && channel === "tooltip" && !("timeUnit" in field)) result["timeUnit"] = "utcyearmonthdate";
  return result;
}

/** A single view or a layered one takes the width of the page; panels start from a width that the page then fits. */
function sized(spec: Spec): Spec {
  if (!("mark" in spec) && !("layer" in spec)) return spec;
  const encoding = (spec["encoding"] ?? {}) as Spec;
  if ("column" in encoding || "facet" in encoding) return { width: 180, height: 180, ...spec };
  return "row" in encoding ? { width: 500, height: 120, ...spec } : { width: "container", height: 260, ...spec };
}

/** How many panels stand below each other. */
export function panelsBelow(spec: Spec, data: Readonly<Record<string, Rows>>): number {
  if (Array.isArray(spec["vconcat"])) return spec["vconcat"].length;
  const row = ((spec["encoding"] ?? {}) as Spec)["row"] as Spec | undefined;
  const column = data["rows"]?.columns[String(row?.["field"])];
  return column === undefined ? 1 : Math.max(1, new Set(Array.from<unknown>(column)).size);
}

/** Which fields are drawn, and against what: "median, low90 and value by time". */
export function fieldsDrawn(spec: unknown): { readonly drawn: readonly string[]; readonly by: readonly string[] } {
  const drawn = new Set<string>(), by = new Set<string>();
  const walk = (view: unknown): void => {
    if (Array.isArray(view)) { view.forEach(walk); return; }
    if (typeof view !== "object" || view === null) return;
    for (const [name, inner] of Object.entries(view)) {
      if (name !== "encoding") { if (name !== "config") walk(inner); continue; }
      for (const [channel, def] of Object.entries(inner as Spec)) {
        const field = typeof def === "object" && def !== null && "field" in def && typeof def.field === "string" ? def.field : null;
        if (field !== null && channel !== "tooltip") (channel === "x" || channel === "row" || channel === "column" || channel === "facet" ? by : drawn).add(field);
      }
    }
  };
  walk(spec);
  return { drawn: [...drawn], by: [...by] };
}
