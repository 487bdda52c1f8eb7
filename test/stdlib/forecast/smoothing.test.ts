import { describe, expect, it } from "vitest";
import { exponentialSmoothing, type SmoothingWeights } from "../../../stdlib/forecast/smoothing/exponentialSmoothing.ts";
import { innovationsFilter, innovationsPath, type SmoothingForm } from "../../../stdlib/forecast/smoothing/innovations.ts";
import { allowed, cases, transformed, type Case } from "./reference.ts";

type Expected = Readonly<Record<string, number | number[]>>;

function agree(c: Case<unknown, Expected>, found: Readonly<Record<string, number | ArrayLike<number>>>): void {
  for (const [field, expected] of Object.entries(c.expected)) {
    const value = found[field];
    expect(value, `${c.id} ${field}`).toBeDefined();
    const a = typeof value === "number" ? [value] : Array.from(value), b = typeof expected === "number" ? [expected] : expected;
    expect(a.length, `${c.id} ${field}`).toBe(b.length);
    const limit = allowed(c.tolerance, field, b);
    a.forEach((x, i) => expect(Math.abs(x - b[i]), `${c.id} ${field}[${i}]: ${x}, expected ${b[i]}`).toBeLessThanOrEqual(limit));
  }
}

describe("smoothing by reference (R 4.2.2 HoltWinters, statsmodels 0.13.5, numpy; see test/reference)", () => {
  type Inputs = SmoothingWeights & { horizon: number; seasonalType?: "additive" | "multiplicative" };
  it.each(cases<Inputs, Expected>("smoothing", "expSmoothing"))("$id", (c) => {
    agree(c, { ...exponentialSmoothing(transformed(c), { ...c.inputs, season: c.inputs.seasonalType }, c.inputs.horizon) });
  });

  type Ets = { horizon: number; error: string; trend?: string; seasonal?: string; phi?: number; alpha: number; beta?: number; gamma?: number; level0: number; trend0?: number; seasonal0?: number[]; period?: number };
  it.each(cases<Ets, Expected>("smoothing", "ets"))("$id", (c) => {
    const i = c.inputs, kind = (text?: string) => (text === "mul" ? "multiplicative" : text === "add" ? "additive" : "none");
    const form: SmoothingForm = { error: i.error === "mul" ? "multiplicative" : "additive", trend: kind(i.trend), season: kind(i.seasonal), length: i.period ?? 1 };
    const f = innovationsFilter(transformed(c), form, { alpha: i.alpha, beta: i.beta ?? 0, gamma: i.gamma ?? 0, phi: i.phi ?? 1, level: i.level0, trend: i.trend0 ?? 0, seasonal: Float64Array.from(i.seasonal0 ?? []) });
    const found = { fitted: f.fitted, sigma2: f.sigma2, logLik: f.logLikelihood, level: f.after.level, trend: f.after.trend, seasonal: f.after.seasonal, point: innovationsPath(form, f.after, new Float64Array(i.horizon)) };
    const { se: _se, ...rest } = c.expected;
    agree({ ...c, expected: rest }, found);
  });
});
