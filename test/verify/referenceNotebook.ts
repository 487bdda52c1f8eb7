// Writes a case of test/reference/expected as a notebook whose live numbers ask for every value that the case expects.

import { readFileSync } from "node:fs";
import { join } from "node:path";

export interface Model {
  readonly arLags: readonly number[]; readonly maLags: readonly number[]; readonly d: number; readonly constant: boolean;
  readonly seasonal?: { readonly period: number; readonly arLags: readonly number[]; readonly maLags: readonly number[]; readonly D: number };
  readonly regressors?: readonly Readonly<Record<string, unknown>>[];
}

type Transform = string | Readonly<Record<string, number | readonly number[] | undefined>>;
type Params = Readonly<Record<string, number | readonly number[]>>;

export interface Case {
  readonly id: string; readonly series: string | null; readonly transform: readonly Transform[]; readonly what: string;
  readonly inputs: Readonly<Record<string, unknown>> & { readonly model?: Model; readonly params?: Params };
  readonly expected: Readonly<Record<string, unknown>>;
  readonly tolerance: Tolerance & { readonly fields?: Readonly<Record<string, Tolerance>> };
  readonly source: string;
}

export interface Tolerance { readonly abs?: number; readonly rel?: number; readonly ofSe?: number; readonly oneSided?: boolean }

/** One live number: its expression, what it must give and how nearly. */
export interface Check { readonly expression: string; readonly field: string; readonly expected: number; readonly within: number; readonly larger?: boolean }

export interface Written { readonly text: string; readonly checks: readonly Check[] }

export function readCases(file: string): readonly Case[] {
  return JSON.parse(readFileSync(join(import.meta.dirname, "../reference/expected", file), "utf8")) as Case[];
}

/** Times of a reference series by 1-based row, for windows. */
function timesOf(series: string): readonly string[] {
  const text = readFileSync(join(import.meta.dirname, "../reference/series", `${series}.csv`), "utf8");
  return text.trim().split("\n").slice(1).map((line) => line.split(",")[0]);
}

const plainNumber = (x: number): string => (Object.is(x, -0) ? "0" : String(x));

/** Checks of one field, number or array, at the case's own tolerance; none where the case has no such field. */
export function checksOf(item: Case, field: string, expression: (index: number) => string, value: unknown = item.expected[field], from = 0): Check[] {
  if (value === undefined) return [];
  const list = (Array.isArray(value) ? value : [value]) as readonly (number | null)[];
  const tolerance = item.tolerance.fields?.[field] ?? item.tolerance;
  const size = Math.max(...list.map((v) => Math.abs(v ?? 0)));
  return list.flatMap((expected, i) => {
    if (expected === null || i < from) return [];
    const within = tolerance.abs ?? (tolerance.rel ?? 0) * size;
    return [{ expression: expression(i), field, expected, within, ...(tolerance.oneSided ? { larger: true } : {}) }];
  });
}

export const cell = (kind: string, name: string, options: Readonly<Record<string, string | undefined>>): string =>
  [`\`\`\`${kind}: ${name}`, ...Object.entries(options).flatMap(([option, text]) => (text === undefined ? [] : [`${option}: ${text}`])), "```", ""].join("\n");

/** Steps of `transform` that the language has as functions of a number; applied by `combine`. */
const pointwise = (step: Transform): string | null => {
  if (step === "log10") return "log(x) / 2.302585092994046";
  if (step === "sqrt") return "sqrt(x)";
  if (step === "square") return "x * x";
  if (typeof step === "object" && typeof step.add === "number") return `x + (${step.add})`;
  if (typeof step === "object" && typeof step.scale === "number") return `x * (${step.scale})`;
  return null;
};

/** Loads a series and applies a case's transform; the last cell is called `name`. Further differences are added at the end. */
export function seriesCells(series: string, transform: readonly Transform[], name: string, differences: readonly number[] = []): string {
  const parts = [cell("load", `${name}File`, { file: `"series/${series}.csv"` })];
  let current = `${name}File`;
  let times = timesOf(series);
  let steps: string[] = [];
  let count = 0;
  const flush = (): void => {
    if (steps.length === 0) return;
    parts.push(cell("transform", `${name}Part${++count}`, { series: current, steps: `[${steps.join(", ")}]` }));
    current = `${name}Part${count}`;
    steps = [];
  };
  for (const step of transform) {
    const formula = pointwise(step);
    if (step === "log") steps.push("log");
    else if (typeof step === "object" && typeof step.difference === "number") { steps.push(`difference(${step.difference})`); times = times.slice(step.difference); }
    else if (formula !== null || (typeof step === "object" && (step.lag !== undefined || step.rows !== undefined))) {
      flush();
      const next = `${name}Part${++count}.own`;
      let expression: string;
      if (formula !== null) expression = `combine(${current}, ${current}, (x, y) => ${formula})`;
      else if (typeof step === "object" && typeof step.lag === "number") expression = `lagged(${current}, ${step.lag})`;
      else {
        const [from, to] = (step as { rows: readonly number[] }).rows;
        expression = `between(${current}, "${times[from - 1]}", "${times[to - 1]}")`;
        times = times.slice(from - 1, to);
      }
      parts.push(cell("values", `${name}Part${count}`, { own: expression }));
      current = next;
    } else throw new Error(`no step for ${JSON.stringify(step)}`);
  }
  for (const lag of differences) steps.push(`difference(${lag})`);
  parts.push(cell("transform", name, { series: current, steps: `[${steps.join(", ")}]` }));
  return parts.join("\n");
}

const lagList = (lags: readonly number[]): string | undefined => (lags.length === 0 ? undefined : `[${lags.join(", ")}]`);

const dense = (lags: readonly number[], values: readonly number[]): string => {
  const out = Array.from({ length: Math.max(0, ...lags) }, () => 0);
  lags.forEach((lag, i) => { out[lag - 1] = values[i]; });
  return `[${out.map(plainNumber).join(", ")}]`;
};

/** The row number less a centre, as a file of its own beside a yearly series: two dozen years longer, for its forecasts. */
export function centredTime(series: string, centre: number): { readonly file: string; readonly text: string } {
  const times = timesOf(series), first = Number(times[0]);
  if (!Number.isInteger(first)) throw new Unsupported("a centred time regressor beside a series that is not yearly");
  const rows = Array.from({ length: times.length + 24 }, (_, t) => `${first + t},${t + 1 - centre}`);
  return { file: `series/${series}_less_${centre}.csv`, text: `time,value\n${rows.join("\n")}\n` };
}

/** The cells of a model: its series (differenced), its regressors and a fit called `m`, its coefficients held where `params` are given. */
export function modelCells(item: Case, model: Model = item.inputs.model as Model, params: Params | undefined = item.inputs.params, method?: string): string {
  const season = model.seasonal;
  const differences = [...Array.from({ length: model.d }, () => 1), ...Array.from({ length: season?.D ?? 0 }, () => season?.period ?? 1)];
  const parts = [seriesCells(item.series as string, item.transform, "w", differences)];
  const regressors = (model.regressors ?? []).map((regressor, i) => {
    const name = `x${i + 1}`;
    if (regressor.kind === "step") return `${name}: levelShift("${timesOf(item.series as string)[(regressor.row as number) - 1]}")`;
    if (regressor.kind === "timeCentred") {
      parts.push(cell("load", name, { file: `"${centredTime(item.series as string, regressor.centre as number).file}"` }));
      return `${name}: ${name}`;
    }
    parts.push(seriesCells(regressor.series as string, regressor.transform as readonly Transform[], name));
    return `${name}: ${name}`;
  });
  const seasonLags = (lags: readonly number[] | undefined): readonly number[] => (lags ?? []).map((lag) => lag);
  const list = (value: number | readonly number[] | undefined): readonly number[] => (value === undefined ? [] : typeof value === "number" ? [value] : value);
  const hold = params && [
    model.arLags.length > 0 && `phi: ${dense(model.arLags, list(params.ar))}`,
    model.maLags.length > 0 && `theta: ${dense(model.maLags, list(params.ma))}`,
    season && season.arLags.length > 0 && `seasonalPhi: ${dense(seasonLags(season.arLags), list(params.sar))}`,
    season && season.maLags.length > 0 && `seasonalTheta: ${dense(seasonLags(season.maLags), list(params.sma))}`,
    model.constant && `mean: ${list(params.constant)[0]}`,
    regressors.length > 0 && `beta: {${list(params.beta).map((b, i) => `x${i + 1}: ${b}`).join(", ")}}`,
    params.sigma2 !== undefined && `sigma2: ${list(params.sigma2)[0]}`,
  ].filter(Boolean).join(", ");
  parts.push(cell("fit", "m", {
    series: "w",
    ar: lagList(model.arLags),
    ma: lagList(model.maLags),
    season: season && (season.arLags.length > 0 || season.maLags.length > 0) ? `{length: ${season.period}, ar: ${lagList(season.arLags) ?? "0"}, ma: ${lagList(season.maLags) ?? "0"}}` : undefined,
    mean: String(model.constant),
    regressors: regressors.length > 0 ? `{${regressors.join(", ")}}` : undefined,
    hold: hold ? `{${hold}}` : undefined,
    method: method && `"${method}"`,
  }));
  return parts.join("\n");
}

/** A case whose inputs the language has no word for; the test says so and skips it. */
export class Unsupported extends Error {}

export function write(cells: string, checks: readonly Check[]): Written {
  // CommonMark wants both signs escaped inside a destination in angle brackets.
  const numbers = checks.map((check) => `- [0](<=${check.expression.replaceAll(/[<>]/g, "\\$&")}>)`).join("\n");
  return { text: `# Reference\n\n${cells}\n\n${numbers}\n`, checks };
}
