// Reads the reference cases and series, and applies a case's transform to bare numbers.

import { readFileSync } from "node:fs";

const folder = new URL("../../reference/", import.meta.url);

export interface Tolerance { readonly rel?: number; readonly abs?: number; readonly fields?: Readonly<Record<string, Tolerance>> }
export interface Case<Inputs, Expected> {
  readonly id: string; readonly series: string | null; readonly transform: readonly unknown[]; readonly what: string;
  readonly inputs: Inputs; readonly expected: Expected; readonly tolerance: Tolerance;
}

export function cases<Inputs, Expected>(file: string, what: string): Case<Inputs, Expected>[] {
  const all = JSON.parse(readFileSync(new URL(`expected/${file}.json`, folder), "utf8")) as Case<Inputs, Expected>[];
  return all.filter((c) => c.what === what);
}

/** Times and values of a reference series; an empty field is missing. */
export function referenceSeries(id: string): { readonly times: string[]; readonly values: Float64Array } {
  const rows = readFileSync(new URL(`series/${id}.csv`, folder), "utf8").trim().split(/\r?\n/).slice(1).map((line) => line.split(","));
  return { times: rows.map((r) => r[0]), values: Float64Array.from(rows, (r) => (r[1] === "" || r[1] === "NA" ? NaN : Number(r[1]))) };
}

export function transformed(c: { readonly series: string | null; readonly transform: readonly unknown[] }): Float64Array {
  let values = referenceSeries(c.series ?? "").values;
  for (const step of c.transform) {
    if (step === "log") values = values.map(Math.log);
    else if (step === "log10") values = values.map(Math.log10);
    else if (typeof step === "object" && step !== null && "rows" in step) {
      const [a, b] = step.rows as [number, number];
      values = values.slice(a - 1, b);
    } else throw new Error(`transform ${JSON.stringify(step)} is not read here`);
  }
  return values;
}

/** Largest allowed difference in a field: relative to the largest expected value of that field. */
export function allowed(tolerance: Tolerance, field: string, expected: ArrayLike<number> | number): number {
  const own = tolerance.fields?.[field] ?? tolerance;
  if (own.abs !== undefined) return own.abs;
  const size = typeof expected === "number" ? Math.abs(expected) : Math.max(...Array.from(expected, Math.abs));
  return (own.rel ?? 0) * size;
}
