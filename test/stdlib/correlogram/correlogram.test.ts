import { describe, expect, it } from "vitest";
import { correlogram } from "../../../stdlib/correlogram/correlogram.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { seriesOf, transformed } from "../referenceCases.ts";

const monthly = (values: Float64Array, start = "1949-01") => makeSeries({ name: "x", every: "P1M", start, values });

describe("correlogram", () => {
  it("of white noise: few lags outside, nothing to explain", () => {
    const c = correlogram({ series: seriesOf("sim_white"), lags: 20 });
    expect(c.status).toBe("ok");
    expect(c.acf).toHaveLength(21);
    expect([c.acf[0], c.pacf[0], c.band.acf[0]]).toEqual([1, 1, 0]);
    expect(c.band.acf[3]).toBeCloseTo(1.96 / Math.sqrt(500), 4);
    expect(c.outside.acf).toEqual([...c.acf.keys()].filter((k) => k > 0 && Math.abs(c.acf[k]) > c.band.acf[k]));
    expect(c.notes[0]).toBe("About 1 of 20 lags falls outside 95% limits by chance alone.");
  });
  it("reads an AR(2) off the lake levels and an MA(1) with a seasonal MA off the airline model's differences", () => {
    expect(correlogram({ series: seriesOf("lakehuron") }).suggests).toMatchObject({ ar: 2, ma: 0 });
    const c = correlogram({ series: monthly(transformed(seriesOf("airline"), ["log", { difference: 1 }, { difference: 12 }]), "1950-02") });
    // Box & Jenkins (1976), section 9.2.3, identify (0,1,1)(0,1,1) from this picture.
    expect(c.suggests).toMatchObject({ ar: 0, ma: 1, season: { length: 12, ar: 0, ma: 1 } });
    expect(c.seasonalLags).toEqual([12, 24, 36]);
    expect(c.portmanteau.map((r) => r.lag)).toEqual([12, 24, 36]);
    expect(c.sentence).toContain("As a suggestion");
  });
  it("asks for a difference first where the autocorrelations die out slowly", () => {
    expect(correlogram({ series: monthly(seriesOf("airline")) }).sentence).toContain("differencing comes first");
    expect(correlogram({ series: monthly(transformed(seriesOf("co2"), [{ difference: 1 }])) }).sentence).toContain("a seasonal difference comes first");
  });
  it("the moving-average band is wider than the one for independence", () => {
    const x = seriesOf("lynx"), wide = correlogram({ series: x, lags: 10, band: "bartlett" }), flat = correlogram({ series: x, lags: 10 });
    expect(wide.band.acf[1]).toBeCloseTo(flat.band.acf[1], 14);
    expect(wide.band.acf[5]).toBeGreaterThan(flat.band.acf[5]);
    expect(wide.band.pacf).toEqual(flat.band.pacf);
  });
  it("says why data cannot answer, and says what gaps do", () => {
    expect(correlogram({ series: [4, 4, 4, 4, 4] }).sentence).toBe("The data cannot answer: all 5 observed values are the same, and a correlation needs values that vary.");
    expect(correlogram({ series: [] }).status).toBe("unavailable");
    expect(correlogram({ series: [1] }).status).toBe("unavailable");
    expect(correlogram({ series: [1, 2] }).status).toBe("unavailable");
    expect(correlogram({ series: [NaN, NaN, NaN, NaN] }).sentence).toContain("no values are observed");
    expect(correlogram({ series: seriesOf("nile_gaps") }).notes.join(" ")).toContain("40 of 100 values are missing");
    expect(() => correlogram({ series: [1, 2, 3, 4], level: 95 })).toThrow("a confidence between 0 and 1");
    expect(() => correlogram({ series: [1, 2, 3, 4], lags: 9 })).toThrow("from 0 to 3");
  });
});
