// Reads the reference cases of the ARMA topics: series, transforms, differences, regressors, tolerances.

import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { expect } from "vitest";
import type { FitOptions, Hold } from "../../../stdlib/arma/model.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { applyStep } from "../../../stdlib/series/steps.ts";

const root = fileURLToPath(new URL("../../reference/", import.meta.url));

export type Transform = string | { difference?: number; rows?: [number, number]; lag?: number; add?: number; scale?: number };
export interface CaseModel {
  arLags: number[]; maLags: number[]; d: number; constant: boolean;
  seasonal?: { period: number; arLags: number[]; maLags: number[]; D: number };
  regressors?: ({ series: string; transform: Transform[] } | { kind: "time" | "timeCentred" | "step" | "pulse"; centre?: number; row?: number })[];
}
export interface CaseParams { ar?: number[]; ma?: number[]; sar?: number[]; sma?: number[]; constant?: number; beta?: number[]; sigma2?: number }
export interface Tolerance { rel?: number; abs?: number; ofSe?: number; oneSided?: boolean; fields?: Record<string, Tolerance> }
// eslint-disable-next-line
export interface Case { id: string; series: string | null; transform: Transform[]; what: string; inputs: { model: CaseModel; params?: CaseParams; order?: number; horizon?: number; maxOrder?: number; backTransform?: string; method?: string } & Record<string, unknown>; expected: Record<string, unknown>; tolerance: Tolerance; note?: string }

export function readCases(file: string): Case[] {
  return JSON.parse(readFileSync(`${root}expected/${file}.json`, "utf8")) as Case[];
}

export function readValues(name: string): Float64Array {
  const lines = readFileSync(`${root}series/${name}.csv`, "utf8").trim().split(/\r?\n/).slice(1);
  return Float64Array.from(lines, line => { const cell = line.split(",")[1]; return cell === "" || cell === undefined ? NaN : Number(cell); });
}

export function readTimes(name: string): string[] {
  return readFileSync(`${root}series/${name}.csv`, "utf8").trim().split(/\r?\n/).slice(1).map(line => line.split(",")[0]);
}

export function transformed(values: Float64Array, transform: readonly Transform[]): Float64Array {
  let x = values;
  for (const t of transform) {
    if (t === "log") x = x.map(Math.log);
    else if (t === "log10") x = x.map(Math.log10);
    else if (t === "sqrt") x = x.map(Math.sqrt);
    else if (t === "square") x = x.map(v => v * v);
    else if (typeof t === "object") {
      if (t.difference !== undefined) x = difference(x, t.difference);
      else if (t.rows) x = x.slice(t.rows[0] - 1, t.rows[1]);
      else if (t.lag !== undefined) { const k = t.lag; x = Float64Array.from(x, (_, i) => i < k ? NaN : x[i - k]); }
      else if (t.add !== undefined) { const c = t.add; x = x.map(v => v + c); }
      else if (t.scale !== undefined) { const c = t.scale; x = x.map(v => v * c); }
    } else throw new RangeError(`unknown transform ${t}`);
  }
  return x;
}

export function difference(x: Float64Array, lag: number): Float64Array {
  return Float64Array.from({ length: x.length - lag }, (_, i) => x[i + lag] - x[i]);
}

export function differenced(x: Float64Array, m: CaseModel): Float64Array {
  let w = x;
  for (let i = 0; i < m.d; i++) w = difference(w, 1);
  for (let i = 0; i < (m.seasonal?.D ?? 0); i++) w = difference(w, m.seasonal!.period);
  return w;
}

/** Regressors in levels, of length n. */
export function regressors(m: CaseModel, n: number): Float64Array[] {
  return (m.regressors ?? []).map(r => {
    if ("series" in r) return transformed(readValues(r.series), r.transform).slice(0, n);
    return Float64Array.from({ length: n }, (_, i) => r.kind === "time" ? i + 1 : r.kind === "timeCentred" ? i + 1 - r.centre!
      : r.kind === "step" ? (i + 1 >= r.row! ? 1 : 0) : (i + 1 === r.row! ? 1 : 0));
  });
}

/** Coefficients in the order of the likelihood: phi, Phi, theta, Theta. */
export function coefficients(p: CaseParams): Float64Array {
  return Float64Array.from([...p.ar ?? [], ...p.sar ?? [], ...p.ma ?? [], ...p.sma ?? []]);
}

/** Fails unless `actual` agrees with the case's expected field at its stated tolerance. `se` serves tolerances in standard errors. */
export function agree(c: Case, field: string, actual: unknown, expected: unknown = c.expected[field], se?: unknown, name = field): void {
  const t: Tolerance = { ...c.tolerance.fields?.[field] ?? c.tolerance };
  if (typeof expected === "number" || expected === null) { compare(c.id, name, actual as number, expected, t, Math.abs(expected ?? 0), se as number | undefined); return; }
  if (Array.isArray(expected)) {
    const got = actual as ArrayLike<number>;
    expect(got.length, `${c.id} ${name}: length`).toBeGreaterThanOrEqual(expected.length);
    const top = Math.max(...expected.map(v => Math.abs(v ?? 0)));
    expected.forEach((v: number | null, i: number) => compare(c.id, `${name}[${i}]`, got[i], v, t, top, (se as number[] | undefined)?.[i]));
    return;
  }
  for (const [key, value] of Object.entries(expected as object)) {
    agree(c, field, (actual as Record<string, unknown>)[key], value, (se as Record<string, unknown> | undefined)?.[key], `${name}.${key}`);
  }
}

function compare(id: string, name: string, actual: number, expected: number | null, t: Tolerance, top: number, se?: number): void {
  if (expected === null) { expect(Number.isNaN(actual), `${id} ${name}: expected none, got ${actual}`).toBe(true); return; }
  const bound = t.ofSe !== undefined && se !== undefined ? t.ofSe * se : t.abs ?? (t.rel ?? 0) * top;
  const gap = t.oneSided && name.startsWith("logLik") ? Math.max(0, expected - actual) : t.oneSided && name.startsWith("sigma2") ? Math.max(0, actual - expected) : Math.abs(actual - expected);
  expect(gap, `${id} ${name}: ${actual}, expected ${expected} within ${bound}`).toBeLessThanOrEqual(bound);
}

/** A case as an analyst would ask for it: a series with its difference steps, regressors in levels, options. */
export function caseOptions(c: Case): FitOptions {
  const m = c.inputs.model, s = m.seasonal;
  let series = makeSeries({ name: c.series ?? "x", values: transformed(readValues(c.series!), c.transform) });
  for (let i = 0; i < m.d; i++) series = applyStep(series, { step: "difference", lag: 1 });
  for (let i = 0; i < (s?.D ?? 0); i++) series = applyStep(series, { step: "difference", lag: s!.period });
  const n = transformed(readValues(c.series!), c.transform).length;
  const future = (c.inputs.horizon ?? 0) as number;
  const made = regressors(m, n + future);
  return {
    series, ar: m.arLags, ma: m.maLags, mean: m.constant,
    ...(s ? { season: { length: s.period, ar: s.arLags, ma: s.maLags } } : {}),
    ...(made.length > 0 ? { regressors: Object.fromEntries(made.map((x, j) => [`x${j}`, makeSeries({ name: `x${j}`, values: x })])) } : {}),
  };
}

/** Holds everything at the case's parameters. */
export function caseHold(c: Case): Hold {
  const m = c.inputs.model, p = c.inputs.params!;
  const dense = (lags: number[], values: number[] = []) => { const out: (number | "free")[] = []; lags.forEach((l, i) => { while (out.length < l) out.push("free"); out[l - 1] = values[i]; }); return out; };
  return {
    phi: dense(m.arLags, p.ar), theta: dense(m.maLags, p.ma), seasonalPhi: dense(m.seasonal?.arLags ?? [], p.sar), seasonalTheta: dense(m.seasonal?.maLags ?? [], p.sma),
    ...(m.constant ? { mean: p.constant } : {}), ...(p.beta ? { beta: Object.fromEntries(p.beta.map((b, j) => [`x${j}`, b])) } : {}),
    ...(p.sigma2 !== undefined ? { sigma2: p.sigma2 } : {}),
  };
}

/** A fit's coefficients in the form of the cases' `coef`. */
export function caseCoefficients(c: Case, of: { phi: Float64Array; theta: Float64Array; seasonalPhi: Float64Array; seasonalTheta: Float64Array; mean: number; beta: Readonly<Record<string, number>> }): Record<string, unknown> {
  const m = c.inputs.model;
  return {
    ar: m.arLags.map(l => of.phi[l - 1]), ma: m.maLags.map(l => of.theta[l - 1]),
    sar: m.seasonal?.arLags.map(l => of.seasonalPhi[l - 1]), sma: m.seasonal?.maLags.map(l => of.seasonalTheta[l - 1]),
    constant: of.mean, beta: Object.values(of.beta),
  };
}
