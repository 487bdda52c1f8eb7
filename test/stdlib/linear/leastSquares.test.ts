import { describe, expect, it } from "vitest";
import { leastSquares } from "../../../stdlib/linear/leastSquares.ts";
import { inversePositive } from "../../../stdlib/linear/cholesky.ts";

describe("leastSquares", () => {
  it("fits a line worked out by hand", () => {
    const fit = leastSquares(Float64Array.of(1, 1, 1, 2, 1, 3, 1, 4), Float64Array.of(2, 3, 5, 6), 4, 2);
    // Sxx = 5, Sxy = 7, slope 1.4, intercept 4 - 1.4 * 2.5 = 0.5, rss = 10 - 7^2 / 5 = 0.2
    expect(fit.beta[0]).toBeCloseTo(0.5, 13);
    expect(fit.beta[1]).toBeCloseTo(1.4, 13);
    expect(fit.rss).toBeCloseTo(0.2, 13);
    expect(fit.se[1]).toBeCloseTo(Math.sqrt(0.1 / 5), 13);
  });

  it("leaves out a column that the others explain, and says which", () => {
    const x = Float64Array.of(1, 1, 2, 1, 2, 3, 1, 3, 4, 1, 5, 6);
    const fit = leastSquares(x, Float64Array.of(1, 2, 4, 4), 4, 3);
    expect(fit.rank).toBe(2);
    expect(fit.aliased).toHaveLength(1);
    expect(fit.se[fit.aliased[0]]).toBeNaN();
  });

  it("keeps digits on a polynomial of degree 5 (Wampler 1970, his first set: all coefficients are 1)", () => {
    const rows = 21, cols = 6;
    const x = new Float64Array(rows * cols), y = new Float64Array(rows);
    for (let i = 0; i < rows; i++) for (let j = 0; j < cols; j++) { x[i * cols + j] = i ** j; y[i] += i ** j; }
    const fit = leastSquares(x, y, rows, cols);
    for (const b of fit.beta) expect(Math.abs(b - 1)).toBeLessThan(1e-8);
  });

  it("gives the inverse cross products", () => {
    const x = Float64Array.of(1, 2, 3, 4, 5, 7), fit = leastSquares(x, Float64Array.of(1, 0, 2), 3, 2);
    const inverse = inversePositive(Float64Array.of(35, 49, 49, 69), 2)!;
    for (let i = 0; i < 4; i++) expect(fit.inverse[i]).toBeCloseTo(inverse[i], 10);
  });

  it("answers with NaN errors when no degrees of freedom are left", () => {
    const fit = leastSquares(Float64Array.of(1, 0, 0, 1), Float64Array.of(3, 4), 2, 2);
    expect([...fit.beta]).toEqual([3, 4]);
    expect(fit.se[0]).toBeNaN();
  });
});
