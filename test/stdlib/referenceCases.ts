// Reads the reference cases and their series, applies their transforms, and compares with their own tolerances.

import { readFileSync } from "node:fs";
import { expect } from "vitest";

export interface Case {
  readonly id: string; readonly series: string | null; readonly what: string;
  readonly transform: readonly unknown[];
  readonly inputs: Record<string, never>;
  readonly expected: Record<string, never>;
  readonly tolerance: Tolerance;
  readonly source: string;
}
interface Tolerance { readonly abs?: number; readonly rel?: number; readonly fields?: Record<string, { abs?: number; rel?: number }> }

const folder = new URL("../reference/", import.meta.url);

/** The cases of a file, of one kind. */
export function casesOf(file: string, what: string): Case[] {
  const all = JSON.parse(readFileSync(new URL(`expected/${file}.json`, folder), "utf8")) as Case[];
  const some = all.filter((c) => c.what === what);
  if (some.length === 0) throw new Error(`${file}.json has no case of ${what}`);
  return some;
}

/** The numbers of a reference series, NaN where missing. */
export function seriesOf(id: string): Float64Array {
  const lines = readFileSync(new URL(`series/${id}.csv`, folder), "utf8").trim().split(/\r?\n/).slice(1);
  return Float64Array.from(lines.map((line) => {
    const text = line.split(",")[1].trim();
    return text === "" || text === "NA" ? NaN : Number(text);
  }));
}

/** First time text of a reference series. */
export function startOf(id: string): string {
  return readFileSync(new URL(`series/${id}.csv`, folder), "utf8").split(/\r?\n/)[1].split(",")[0];
}

/** The series of a case after its transforms. */
export function dataOf(c: { series: string | null; transform: readonly unknown[] }): Float64Array {
  return transformed(seriesOf(String(c.series)), c.transform);
}

export function transformed(values: Float64Array, transform: readonly unknown[]): Float64Array {
  return transform.reduce((x: Float64Array, step) => {
    if (step === "log") return x.map(Math.log);
    if (step === "log10") return x.map(Math.log10);
    if (step === "sqrt") return x.map(Math.sqrt);
    if (step === "square") return x.map((v) => v * v);
    const [[name, arg]] = Object.entries(step as Record<string, unknown>);
    if (name === "difference") return x.slice(Number(arg)).map((v, i) => v - x[i]);
    if (name === "rows") { const [from, to] = arg as [number, number]; return x.slice(from - 1, to); }
    if (name === "lag") return x.map((_, i) => (i < Number(arg) ? NaN : x[i - Number(arg)]));
    if (name === "add") return x.map((v) => v + Number(arg));
    if (name === "scale") return x.map((v) => v * Number(arg));
    throw new Error(`unknown transform ${name}`);
  }, values);
}

/** Holds actual numbers against a field of the case, within the case's own tolerance for it; null is NaN. */
export function agrees(c: Case, field: string, actual: number | ArrayLike<number>, expected: unknown): void {
  const a = typeof actual === "number" ? [actual] : Array.from(actual);
  const e = (Array.isArray(expected) ? expected : [expected]).map((v) => (v === null ? NaN : Number(v)));
  expect(a.length, `${c.id} ${field}: length`).toBe(e.length);
  const own = c.tolerance.fields?.[field] ?? c.tolerance;
  const largest = Math.max(...e.filter((v) => !Number.isNaN(v)).map(Math.abs));
  const allowed = own.abs ?? (own.rel ?? NaN) * largest;
  expect(allowed, `${c.id} ${field}: a tolerance`).toBeGreaterThanOrEqual(0);
  e.forEach((v, i) => {
    if (Number.isNaN(v)) expect(a[i], `${c.id} ${field}[${i}]`).toBeNaN();
    else expect(Math.abs(a[i] - v), `${c.id} ${field}[${i}]: ${a[i]} against ${v}`).toBeLessThanOrEqual(allowed);
  });
}
