import { describe, expect, it } from "vitest";
import { chiSquareCdf, chiSquareQuantile, chiSquareUpper } from "../../../stdlib/distributions/chiSquare.ts";
import { fUpper } from "../../../stdlib/distributions/fisherF.ts";
import { normalCdf, normalQuantile, normalUpper } from "../../../stdlib/distributions/normal.ts";
import { betaInc, gammaP, gammaQ, logGamma } from "../../../stdlib/distributions/special.ts";
import { tCdf, tQuantile, tUpper } from "../../../stdlib/distributions/studentT.ts";

/** Relative agreement to 13 digits: what the published algorithms promise. */
function same(actual: number, expected: number, relative = 1e-13): void {
  expect(Math.abs(actual - expected), `${actual} against ${expected}`).toBeLessThanOrEqual(relative * Math.abs(expected));
}

// Expected values: R 4.2.2, functions qnorm, pnorm, pchisq, pt, qt, pf, lgamma, pbeta, qchisq with lower.tail as named.
describe("distributions agree with R", () => {
  it("normal quantiles, also where p is 1e-300", () => {
    [[1e-300, -37.0470962993612], [1e-20, -9.262340089798405], [1e-10, -6.361340902404056], [0.001, -3.0902323061678132], [0.3, -0.5244005127080407]]
      .forEach(([p, z]) => same(normalQuantile(p), z));
    expect(normalQuantile(0.5)).toBe(0);
    expect([normalQuantile(0), normalQuantile(1), normalQuantile(1.1)]).toEqual([-Infinity, Infinity, NaN]);
  });
  it("normal tails keep their digits at ten standard deviations", () => {
    [[-10, 7.619853024160527e-24], [-1, 0.15865525393145705], [0.5, 0.691462461274013], [3, 0.9986501019683699]].forEach(([z, p]) => same(normalCdf(z), p));
    [[10, 7.619853024160527e-24], [8, 6.220960574271785e-16]].forEach(([z, p]) => same(normalUpper(z), p));
  });
  it("chi-square upper tails and quantiles", () => {
    [[1, 1, 0.31731050786291415], [10, 5, 0.0752352461465122], [100, 20, 1.259608459166091e-12], [1000, 500, 1.2085183611329766e-35], [50, 100, 0.9999930466947524]]
      .forEach(([x, df, p]) => same(chiSquareUpper(x, df), p, 1e-12));
    [[0.95, 1, 3.841458820694124], [0.99, 12, 26.21696730553585], [0.5, 100, 99.3341292359885], [1e-6, 3, 0.0002418104872012428]]
      .forEach(([p, df, x]) => same(chiSquareQuantile(p, df), x, 1e-9));
    expect(chiSquareCdf(3, 4) + chiSquareUpper(3, 4)).toBeCloseTo(1, 14);
    expect([chiSquareUpper(0, 3), chiSquareUpper(-1, 3), chiSquareUpper(Infinity, 3)]).toEqual([1, 1, 0]);
  });
  it("Student's t, whole and fractional degrees of freedom", () => {
    [[0.5, 1, 0.3524163823495668], [2, 5, 0.05096973941492914], [10, 30, 2.2876257041148048e-11], [50, 3, 8.808576020635976e-6]]
      .forEach(([t, df, p]) => same(tUpper(t, df), p, 1e-12));
    [[0.975, 1, 12.706204736174694], [0.6, 5, 0.267180865704145], [1e-10, 30, -9.37748978040714], [0.999, 2.5, 13.822193110866]]
      .forEach(([p, df, t]) => same(tQuantile(p, df), t, 1e-11));
    same(tCdf(-2, 5), 0.05096973941492914, 1e-12);
  });
  it("F upper tails down to 1e-34", () => {
    [[1, 1, 10, 0.34089313230206], [4, 5, 20, 0.011183751855265598], [50, 10, 100, 1.9168227637538266e-34], [0.2, 3, 7, 0.893167955662489]]
      .forEach(([f, a, b, p]) => same(fUpper(f, a, b), p, 1e-12));
  });
  it("the incomplete gamma and beta functions", () => {
    [[0.5, 0.5723649429247001], [3.7, 1.4280723266653881], [100, 359.1342053695754], [1e-5, 11.512919692895826]].forEach(([x, y]) => same(logGamma(x), y));
    [[0.1, 2, 3, 0.05230000000000003], [0.5, 30, 20, 0.07620388598073913], [0.9, 0.5, 5, 0.9999974294103008]].forEach(([x, a, b, y]) => same(betaInc(x, a, b), y, 1e-12));
    same(gammaP(3, 2) + gammaQ(3, 2), 1);
    expect([gammaP(2, Infinity), gammaQ(2, Infinity)]).toEqual([1, 0]);
  });
  it("the quantile undoes the tail across the whole range", () => {
    for (let k = 1; k < 300; k += 7) {
      const p = 10 ** -k;
      same(normalCdf(normalQuantile(p)), p, 1e-11 * k);
    }
  });
});
