import { describe, expect, it } from "vitest";
import { outlookOf } from "../../../stdlib/forecast/outlook.ts";
import { pathAt } from "../../../stdlib/forecast/paths.ts";
import type { Predictive } from "../../../stdlib/forecast/predictive.ts";
import { redoValue, undoValue, type UndoStep } from "../../../stdlib/forecast/undo.ts";
import { cases } from "./reference.ts";

const one = (mean: number, sd: number): Predictive => ({ mean: Float64Array.of(mean), covariance: () => Float64Array.of(sd * sd), se: Float64Array.of(sd) });
const step = (lambda: number): UndoStep => (lambda === 0 ? { undo: "exp" } : { undo: "boxCox", lambda });

describe("back to data units by reference (R 4.2.2, scipy quadrature; see test/reference)", () => {
  type Inputs = { lambda: number; forecast?: { mean: number; sd: number } };
  type Out = { backMedian: number; backLower95: number; backUpper95: number; backMeanExact: number };
  it.each(cases<Inputs, Out>("boxcox", "boxcox").filter((c) => c.inputs.forecast))("$id", (c) => {
    const { mean, sd } = c.inputs.forecast!, found = outlookOf(one(mean, sd), [step(c.inputs.lambda)], 1), near = (a: number, b: number, rel: number) => expect(Math.abs(a / b - 1)).toBeLessThanOrEqual(rel);
    near(found.median[0], c.expected.backMedian, 1e-9);
    near(found.quantile(0.025)[0], c.expected.backLower95, 1e-9);
    near(found.quantile(0.975)[0], c.expected.backUpper95, 1e-9);
    near(found.mean[0], c.expected.backMeanExact, 1e-8);
  });
});

describe("an outlook by law", () => {
  const steps: UndoStep[] = [{ undo: "exp" }, { undo: "affine", add: Float64Array.of(3, -1), times: Float64Array.of(2, 0.5) }];
  const two: Predictive = { mean: Float64Array.of(1, 1.5), covariance: () => Float64Array.of(0.04, 0.03, 0.03, 0.09), se: Float64Array.of(0.2, 0.3) };
  it("undoing and redoing a step is the identity", () => {
    for (const lambda of [-0.5, 0, 0.3, 1, 2]) expect(redoValue([step(lambda)], 0, undoValue([step(lambda)], 0, 0.7))).toBeCloseTo(0.7, 12);
    expect(redoValue(steps, 1, undoValue(steps, 1, 0.7))).toBeCloseTo(0.7, 12);
  });
  it("moments of sample paths agree with the exact ones, covariance included, within sampling error", () => {
    const o = outlookOf(two, steps, 1), drawn = o.paths(40_000, 5), n = drawn.count, paths = Array.from({ length: n }, (_, i) => pathAt(drawn, i)), c = o.covariance()!;
    const mean = [0, 1].map((h) => paths.reduce((s, p) => s + p[h], 0) / n);
    mean.forEach((m, h) => expect(Math.abs(m - o.mean[h])).toBeLessThan(4 * o.sd[h] / Math.sqrt(n)));
    const cross = paths.reduce((s, p) => s + (p[0] - mean[0]) * (p[1] - mean[1]), 0) / n;
    expect(Math.abs(cross - c[1])).toBeLessThan(4 * Math.sqrt((c[0] * c[3] + c[1] ** 2) * 1.5 / n));
    expect(Math.sqrt(c[3])).toBeCloseTo(o.sd[1], 12);
  });
  it("probabilities and quantiles are each other's inverse, also where the scale turns over", () => {
    for (const sign of [1, -1]) {
      const o = outlookOf(two, [{ undo: "exp" }, { undo: "affine", add: Float64Array.of(0, 0), times: Float64Array.of(sign, sign) }], 1);
      for (const p of [0.05, 0.5, 0.9]) expect(1 - o.above(1, o.quantile(p)[1])).toBeCloseTo(p, 10);
      expect(o.quantile(0.9)[0]).toBeGreaterThan(o.quantile(0.1)[0]);
    }
  });
  it("a difference under a log is undone path by path: the sum of draws", () => {
    const o = outlookOf(two, [{ undo: "exp" }, { undo: "difference", lag: 1, tail: Float64Array.of(10) }], 1), direct = outlookOf(two, [{ undo: "exp" }], 1);
    expect(o.mean[0]).toBeCloseTo(10 + direct.mean[0], 1);
    expect(Math.abs(o.mean[1] - (10 + direct.mean[0] + direct.mean[1]))).toBeLessThan(0.1);
  });
  it("a difference of normal things stays normal, with the right covariance", () => {
    const o = outlookOf(two, [{ undo: "difference", lag: 1, tail: Float64Array.of(10) }], 1);
    expect(o.normal).toBe(true);
    expect(o.mean).toEqual(Float64Array.of(11, 12.5));
    expect(o.sd[1] ** 2).toBeCloseTo(0.04 + 0.09 + 2 * 0.03, 12);
  });
  it("the CRPS of a Box-Cox outlook with lambda 1 is the normal's", () => {
    const a = outlookOf(one(5, 2), [{ undo: "boxCox", lambda: 1 }], 1), b = outlookOf(one(6, 2), [], 1);
    for (const y of [4, 6, 9]) expect(a.crps(0, y)).toBeCloseTo(b.crps(0, y), 3);
  });
});
