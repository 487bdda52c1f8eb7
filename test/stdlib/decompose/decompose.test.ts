import { describe, expect, it } from "vitest";
import { decompose, subseries } from "../../../stdlib/decompose/decompose.ts";
import { estimateLambda, guerrero, lambdaProfile, likelihood } from "../../../stdlib/decompose/lambda.ts";
import { rangeMean } from "../../../stdlib/decompose/rangeMean.ts";
import { spectrum } from "../../../stdlib/decompose/spectrum.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { agrees, casesOf, dataOf, seriesOf } from "../referenceCases.ts";

describe("decompose agrees with the reference values", () => {
  it.each(casesOf("decomposition", "decompose"))("$id", (c) => {
    const { period, type } = c.inputs as unknown as { period: number; type: "additive" | "multiplicative" };
    const d = decompose(dataOf(c), { length: period, kind: type });
    for (const field of ["figure", "trend", "seasonal", "remainder"] as const) agrees(c, field, d[field], c.expected[field]);
  });
});

describe("Box-Cox parameters agree with the reference values", () => {
  it.each(casesOf("boxcox", "guerrero"))("$id", (c) => {
    const { blockLength, range, grid } = c.inputs as unknown as { blockLength: number; range: [number, number]; grid: number[] };
    const e = c.expected as unknown as { lambda: number; coefficientOfVariation: number; cvAtGrid: number[] };
    const f = guerrero(dataOf(c), blockLength), lambda = estimateLambda(dataOf(c), "guerrero", { length: blockLength, from: range[0], to: range[1] });
    agrees(c, "cvAtGrid", grid.map(f), e.cvAtGrid);
    agrees(c, "lambda", lambda, e.lambda);
    agrees(c, "coefficientOfVariation", f(lambda), e.coefficientOfVariation);
  });
  it.each(casesOf("boxcox", "boxcoxML"))("$id", (c) => {
    const { regression, period, grid } = c.inputs as unknown as { regression: "mean" | "trend" | "trend+season"; period: number; grid: number[] };
    const e = c.expected as unknown as { lambda: number; profileAtGrid: number[]; profileMax: number; ci95: number[] };
    const kind = regression === "mean" || regression === "trend" ? regression : "season";
    const f = likelihood(dataOf(c), kind, period), p = lambdaProfile(dataOf(c), "likelihood", { regression: kind, length: period });
    agrees(c, "profileAtGrid", grid.map(f), e.profileAtGrid);
    agrees(c, "lambda", p.lambda, e.lambda);
    agrees(c, "profileMax", f(p.lambda), e.profileMax);
    agrees(c, "ci95", [p.low, p.high], e.ci95);
  });
  it("say what they show, and why they cannot", () => {
    const passengers = makeSeries({ name: "passengers", every: "P1M", start: "1949-01", values: seriesOf("airline") });
    expect(lambdaProfile(passengers, "likelihood", { regression: "trend" }).sentence).toMatch(/^By likelihood lambda is .* a logarithm \(0\) lies inside\./);
    expect(lambdaProfile([1, 2, 0, 4, 5, 6, 7, 8], "likelihood").note).toBe("a power or a logarithm needs values above 0, and the least is 0");
    expect(estimateLambda([1, 2, 3])).toBeNaN();
    expect(estimateLambda(passengers.values.map((v) => 1000 * v), "guerrero", { length: 12 })).toBeCloseTo(estimateLambda(passengers), 6);
  });
});

describe("the range-mean picture", () => {
  it("asks for a logarithm where the spread grows with the level, and for nothing where it does not", () => {
    const grow = rangeMean(makeSeries({ name: "passengers", every: "P1M", start: "1949-01", values: seriesOf("airline") }));
    expect(grow.mean).toHaveLength(12);
    expect(grow.slope).toBeGreaterThan(0.75);
    expect(grow.sentence).toContain("a logarithm evens out");
    // By hand: blocks 3, 5 and 30, 50 and 300, 500.
    const hand = rangeMean([3, 5, 30, 50, 300, 500], 2);
    expect([...hand.mean, ...hand.range]).toEqual([4, 40, 400, 2, 20, 200]);
    expect(hand.slope).toBeCloseTo(1, 12);
    expect(rangeMean([1, 2], 2).sentence).toContain("too few");
  });
});

describe("the spectrum", () => {
  it("agrees with R, smoothed with a taper and raw", () => {
    // R 4.2.2: spec.pgram(LakeHuron, spans = c(5, 7), taper = 0.1, detrend = FALSE, demean = TRUE, fast = FALSE) and spans none, taper 0.
    const x = seriesOf("lakehuron");
    const a = spectrum(x, { smooth: [2, 3], taper: 0.1 });
    [[0, 14.229561875935], [1, 12.6378908707583], [9, 2.4157765599724], [48, 0.0347258589292119]].forEach(([j, v]) => expect(a.smoothed[j] / v).toBeCloseTo(1, 10));
    expect([a.df, a.bandwidth]).toEqual([expect.closeTo(14.2831297482968, 10), expect.closeTo(0.0222392803241871, 12)]);
    const b = spectrum(x, { smooth: [] });
    [[0, 25.2981211190061], [1, 0.830367331175034], [9, 0.000479503090064916], [48, 0.014693877551016]].forEach(([j, v]) => expect(Math.abs(b.smoothed[j] - v)).toBeLessThan(1e-10));
    expect([b.df, b.bandwidth]).toEqual([2, expect.closeTo(0.00294566463872258, 12)]);
  });
  it("has the variance as its mean over all frequencies, and finds the sunspots' cycle of about eleven years", () => {
    const x = seriesOf("nist_lew"), s = spectrum(x, { smooth: [] }), mean = x.reduce((a, b) => a + b, 0) / x.length;
    const total = 2 * s.raw.slice(0, -1).reduce((a, b) => a + b, 0) + s.raw[s.raw.length - 1];
    expect(total / x.length).toBeCloseTo(x.reduce((a, v) => a + (v - mean) ** 2, 0) / x.length, 6);
    expect(Math.abs(spectrum(seriesOf("sunspot_year"), { smooth: [3] }).peak!.period - 11)).toBeLessThan(1);
  });
  it("says why it cannot", () => {
    expect(spectrum([1, 2, 3]).note).toContain("too few");
    expect(spectrum(Array.from({ length: 20 }, () => 3)).note).toContain("the same");
    expect(spectrum(Array.from({ length: 20 }, (_, t) => (t === 3 ? NaN : t))).note).toContain("gaps");
    expect(() => spectrum(seriesOf("nile"), { smooth: [0] })).toThrow("half-width is 0");
    expect(() => spectrum(seriesOf("nile"), { smooth: [60] })).toThrow("only 50");
  });
});

describe("seasonal subseries", () => {
  it("by hand", () => {
    const s = subseries(makeSeries({ name: "x", every: "P3M", start: "2020-Q1", values: [1, 2, 3, 4, 5, NaN, 7] }));
    expect(s.map((q) => [q.position, q.mean, q.times.length])).toEqual([[0, 3, 2], [1, 2, 2], [2, 5, 2], [3, 4, 1]]);
    expect(s[1].times).toEqual(["2020-Q2", "2021-Q2"]);
  });
});
