import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { extendedAcf, smallestCanonical } from "../../../stdlib/correlogram/extendedAcf.ts";
import { prewhitenedCcf } from "../../../stdlib/correlogram/prewhitenedCcf.ts";
import { cusum, largestBreak } from "../../../stdlib/diagnostics/breaks.ts";
import { monti } from "../../../stdlib/diagnostics/portmanteau.ts";
import { normals, seeded } from "../../../stdlib/forecast/random.ts";
import { symmetricEigen } from "../../../stdlib/linear/symmetricEigen.ts";
import { canovaHansen } from "../../../stdlib/unitroot/canovaHansen.ts";
import { dfGls } from "../../../stdlib/unitroot/dfGls.ts";
import { kpss } from "../../../stdlib/unitroot/kpss.ts";
import { seriesOf, transformed } from "../referenceCases.ts";

/** Values of test/fixtures/identify.R: R 4.2.2, package stats, by the papers' formulas. */
const r = JSON.parse(readFileSync(new URL("../../fixtures/identify.json", import.meta.url), "utf8")) as Record<string, Record<string, number[]>>;

function same(actual: ArrayLike<number>, expected: readonly number[], absolute = 1e-9): void {
  expect(actual.length).toBe(expected.length);
  expected.forEach((v, i) => expect(Math.abs(actual[i] - v), `[${i}] ${actual[i]} against ${v}`).toBeLessThanOrEqual(absolute * Math.max(1, Math.abs(v))));
}

describe("methods written out in R from their papers agree", () => {
  it.each(Object.keys(r).filter((k) => k.startsWith("dfGls")))("%s", (key) => {
    const [, id, trend, lags] = key.split(" ");
    same([dfGls(seriesOf(id), { trend: trend as "constant" | "linear", lags: Number(lags) }).statistic], r[key].statistic);
  });
  it("Canova-Hansen", () => {
    same([canovaHansen(seriesOf("airline").map(Math.log), { length: 12, bandwidth: 4 }).statistic], r["canovaHansen airline 12 4"].statistic, 1e-8);
    same([canovaHansen(seriesOf("realgdp").map(Math.log), { length: 4, bandwidth: 0 }).statistic], r["canovaHansen realgdp 4 0"].statistic, 1e-8);
  });
  it("Monti, largest break and CUSUM", () => {
    for (const lag of [5, 12]) same([monti(seriesOf("nile"), lag).statistic], r[`monti nile ${lag}`].statistic);
    for (const id of ["nile", "lakehuron"]) {
      const t = largestBreak(seriesOf(id));
      same([t.statistic], r[`largestBreak ${id}`].statistic);
      expect(t.at).toBe(String(r[`largestBreak ${id}`].first[0]));
      same([cusum(seriesOf(id)).statistic], r[`cusum ${id}`].statistic);
    }
  });
  it("the data-dependent bandwidth of KPSS", () => {
    for (const id of ["nile", "lakehuron", "treering"]) expect(kpss(seriesOf(id), { bandwidth: "automatic" }).lags).toBe(r[`automaticBandwidth ${id}`].lags[0]);
  });
  it("the extended autocorrelations", () => same(extendedAcf(seriesOf("lakehuron"), 3, 4).values, r["extendedAcf lakehuron 3 4"].values, 1e-9));
  it("the smallest canonical correlations", () => same(smallestCanonical(seriesOf("sim_arma21_long"), 3, 3).values, r["smallestCanonical sim_arma21_long 3 3"].p, 1e-7));
  it("the prewhitened cross-correlations", () => {
    const d = [{ difference: 1 }], c = prewhitenedCcf(transformed(seriesOf("bjsales_lead"), d), transformed(seriesOf("bjsales"), d), 8, { order: 5 });
    same(c.ccf, r["prewhitenedCcf bjsales 8"].ccf);
    expect(Array.from(c.lags)).toEqual(Array.from({ length: 17 }, (_, i) => i - 8));
  });
});

describe("order tables by example and at the edge", () => {
  it("suggest the orders of mixed series", () => {
    const draw = normals(seeded(21)), x = new Float64Array(400);
    let before = draw();
    for (let t = 1; t < 400; t++) { const e = draw(); x[t] = 0.7 * x[t - 1] + e + 0.6 * before; before = e; }
    expect(extendedAcf(x).suggests).toEqual({ ar: 1, ma: 1 });
    expect(smallestCanonical(x).suggests).toEqual({ ar: 1, ma: 1 });
    expect(smallestCanonical(seriesOf("sim_arma21_long")).suggests).toEqual({ ar: 2, ma: 1 });
  });
  it("read too high an order in fewer than a third of mixed series of 500", () => {
    // With the white-noise standard error for every zero, and one mark in twenty allowed whatever the count, it was 62%.
    const draw = normals(seeded(9)), n = 500;
    let high = 0;
    for (let i = 0; i < 60; i++) {
      const x = new Float64Array(n + 100);
      for (let t = 1, before = draw(); t < x.length; t++) { const e = draw(); x[t] = 0.7 * x[t - 1] + e + 0.6 * before; before = e; }
      const { suggests } = extendedAcf(x.slice(100));
      if (suggests === null || suggests.ar + suggests.ma > 2) high++;
    }
    expect(high).toBeLessThan(20);
  });
  it("say where nothing is asked for, and why they cannot answer", () => {
    const draw = normals(seeded(12));
    expect(extendedAcf(Float64Array.from({ length: 400 }, draw)).suggests).toEqual({ ar: 0, ma: 0 });
    expect(extendedAcf([1, 2, 3]).sentence).toBe("The data cannot answer: 3 values are too few for orders up to 5 and 8.");
    expect(smallestCanonical(Float64Array.from({ length: 60 }, () => 1)).note).toContain("the same");
    expect(extendedAcf(seriesOf("nile_gaps")).note).toContain("gaps");
    expect(() => extendedAcf([1, 2], 0, 3)).toThrow("from 1 on");
  });
  it("finds which series leads, with its sentence", () => {
    const draw = normals(seeded(9)), x = new Float64Array(200), y = new Float64Array(200);
    for (let t = 1; t < 200; t++) { x[t] = 0.7 * x[t - 1] + draw(); y[t] = (t > 3 ? 0.8 * x[t - 3] : 0) + 0.5 * draw(); }
    const c = prewhitenedCcf(x, y, 10);
    expect(c.ccf.indexOf(Math.max(...c.ccf)) - 10).toBe(3);
    expect(c.sentence).toContain("the first leads the second by 3");
    const back = prewhitenedCcf(y, x, 10);
    expect(back.sentence).toContain("the second leads the first by 3");
    expect(prewhitenedCcf(x, x.map(() => 1), 5)).toMatchObject({ status: "unavailable", note: "one of the series does not vary" });
    expect(() => prewhitenedCcf(x, [1, 2], 3)).toThrow("bare numbers have no dates");
  });
  it("eigenvalues by hand, and vectors that give the matrix back", () => {
    const a = Float64Array.of(4, 1, 0, 1, 3, 1, 0, 1, 2), { values, vectors } = symmetricEigen(a, 3);
    expect(values.reduce((s, v) => s + v, 0)).toBeCloseTo(9, 12);
    for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) {
      let sum = 0;
      for (let k = 0; k < 3; k++) sum += vectors[i * 3 + k] * values[k] * vectors[j * 3 + k];
      expect(sum).toBeCloseTo(a[i * 3 + j], 12);
    }
    expect(Array.from(symmetricEigen(Float64Array.of(2, 1, 1, 2), 2).values).sort()).toEqual([expect.closeTo(1, 12), expect.closeTo(3, 12)]);
  });
});
