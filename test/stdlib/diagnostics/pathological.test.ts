import { describe, expect, it } from "vitest";
import { correlogram } from "../../../stdlib/correlogram/correlogram.ts";
import { extendedAcf, smallestCanonical } from "../../../stdlib/correlogram/extendedAcf.ts";
import { decompose } from "../../../stdlib/decompose/decompose.ts";
import { lambdaProfile } from "../../../stdlib/decompose/lambda.ts";
import { rangeMean } from "../../../stdlib/decompose/rangeMean.ts";
import { spectrum } from "../../../stdlib/decompose/spectrum.ts";
import { stl } from "../../../stdlib/decompose/stl.ts";
import { cusum, largestBreak } from "../../../stdlib/diagnostics/breaks.ts";
import { archLM, mcleodLi } from "../../../stdlib/diagnostics/changingVariance.ts";
import { cumulativePeriodogram } from "../../../stdlib/diagnostics/cumulativePeriodogram.ts";
import { jarqueBera } from "../../../stdlib/diagnostics/jarqueBera.ts";
import { ljungBox, monti } from "../../../stdlib/diagnostics/portmanteau.ts";
import { quantiles } from "../../../stdlib/diagnostics/qq.ts";
import type { Test } from "../../../stdlib/diagnostics/test.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { adf } from "../../../stdlib/unitroot/adf.ts";
import { canovaHansen } from "../../../stdlib/unitroot/canovaHansen.ts";
import { dfGls } from "../../../stdlib/unitroot/dfGls.ts";
import { kpss } from "../../../stdlib/unitroot/kpss.ts";
import { phillipsPerron } from "../../../stdlib/unitroot/phillipsPerron.ts";
import { stationarity } from "../../../stdlib/unitroot/stationarity.ts";

const of = (n: number, f: (t: number) => number): Float64Array => Float64Array.from({ length: n }, (_, t) => f(t));

/** Data that break formulas: every method meets all of them. */
const troubles: Record<string, Float64Array> = {
  "nothing": of(0, () => 0), "one value": of(1, () => 5), "two values": of(2, (t) => t), "three values": of(3, (t) => t * t),
  "zeros": of(60, () => 0), "a constant": of(60, () => 0.1), "only gaps": of(60, () => NaN), "one value among gaps": of(60, (t) => (t === 9 ? 1 : NaN)),
  "two neighbours among gaps": of(60, (t) => (t === 9 || t === 10 ? t : NaN)), "every other one missing": of(60, (t) => (t % 2 ? Math.sin(t) : NaN)),
  "a straight line": of(60, (t) => 3 * t), "a parabola": of(60, (t) => t * t), "plus and minus one": of(60, (t) => (t % 2 ? 1 : -1)), "a pure season": of(60, (t) => t % 12),
  "one spike": of(60, (t) => (t === 30 ? 1 : 0)), "one step": of(60, (t) => (t >= 30 ? 1 : 0)), "huge": of(60, (t) => 1e150 * Math.sin(t * t)), "tiny": of(60, (t) => 1e-150 * Math.sin(t * t)),
  "far from zero": of(60, (t) => 1e12 + Math.sin(t * t)), "explosive": of(60, (t) => 1.5 ** t), "two values only": of(60, (t) => ((t * 7) % 5 > 2 ? 1 : 0)),
};

const tests: Record<string, (x: Float64Array) => Test> = {
  adf, kpss, phillipsPerron, dfGls, jarqueBera, cusum, largestBreak, cumulativePeriodogram, archLM,
  "adf with a trend": (x) => adf(x, { trend: "quadratic" }), "dfGls with a trend": (x) => dfGls(x, { trend: "linear" }), "kpss, automatic": (x) => kpss(x, { bandwidth: "automatic", trend: "linear" }),
  mcleodLi: (x) => mcleodLi(x), ljungBox: (x) => ljungBox(x, 1), monti: (x) => monti(x, 1), canovaHansen: (x) => canovaHansen(x, { length: 12 }),
};

describe.each(Object.entries(troubles))("of %s", (_, x) => {
  it.each(Object.entries(tests))("%s gives a p-value, or a reason", (__, test) => {
    let result: Test;
    try { result = test(x); } catch (error) { expect(error).toBeInstanceOf(RangeError); expect((error as Error).message).toMatch(/expected|needs/); return; }
    expect(result.sentence, "a sentence").toBeTruthy();
    if (result.status === "unavailable") expect([result.p, result.note?.length ?? 0]).toEqual([NaN, expect.any(Number)]);
    else {
      expect(result.p).toBeGreaterThanOrEqual(0);
      expect(result.p).toBeLessThanOrEqual(1);
      expect(result.statistic).not.toBeNaN();
    }
  });
  it("the composites answer in words", () => {
    const series = makeSeries({ name: "x", every: "P1M", start: "2000-01", values: x });
    for (const result of [correlogram({ series }), stationarity({ series }), lambdaProfile(series, "guerrero"), lambdaProfile(series, "likelihood"), spectrum(series), rangeMean(series)]) {
      expect(result.sentence.length).toBeGreaterThan(20);
      expect(result.sentence).not.toMatch(/NaN|undefined|Infinity/);
    }
    for (const table of [extendedAcf(x), smallestCanonical(x)]) {
      if (table.status === "ok") expect(Array.from(table.values).every((v) => !Number.isNaN(v))).toBe(true);
      else expect(table.sentence).toMatch(/^The data cannot answer: /);
    }
    for (const parts of [stl(series), decompose(series)]) if (parts.status === "unavailable") expect(parts.note?.length).toBeGreaterThan(5);
    expect(Array.from(quantiles(x).low).every(Number.isFinite)).toBe(true);
  });
});
