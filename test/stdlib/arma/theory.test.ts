import { describe, expect, it } from "vitest";
import { expandedPolynomials } from "../../../stdlib/arma/coefficients.ts";
import { inverseRoots, roots } from "../../../stdlib/arma/roots.ts";
import { simulate } from "../../../stdlib/arma/simulate.ts";
import { halfLife, longRun, modelRoots, piWeights, psi, theoreticalAcf, theoreticalAutocovariance, theoreticalPacf, theoreticalSpectrum } from "../../../stdlib/arma/theory.ts";
import { agree, readCases } from "./cases.ts";

describe("theory", () => {
  for (const c of readCases("arma_theory")) {
    it(`${c.id}: weights, correlations, spectrum and roots agree with the reference`, () => {
      const i = c.inputs as unknown as { ar?: number[]; ma?: number[]; sar?: number[]; sma?: number[]; period?: number; sigma2?: number; maxLag: number; maxPacf?: number; freqs: number[] };
      const model = { phi: i.ar ?? [], theta: i.ma ?? [], seasonalPhi: i.sar ?? [], seasonalTheta: i.sma ?? [], seasonLength: i.period ?? 0, sigma2: i.sigma2 ?? 1 };
      const full = expandedPolynomials(model);
      agree(c, "arFull", full.phi);
      agree(c, "maFull", full.theta);
      agree(c, "psi", psi(model, i.maxLag));
      agree(c, "pi", piWeights(model, i.maxLag));
      agree(c, "acovf", theoreticalAutocovariance(model, i.maxLag));
      agree(c, "acf", theoreticalAcf(model, i.maxLag));
      agree(c, "pacf", theoreticalPacf(model, i.maxPacf ?? i.maxLag).slice(1));
      agree(c, "spectrum", theoreticalSpectrum(model, i.freqs));
      const r = modelRoots(model);
      agree(c, "arRootModuli", r.ar.map(v => v.modulus));
      agree(c, "maRootModuli", r.ma.map(v => v.modulus));
    });
  }

  it("a shock to an AR(1) at 0.5 has halved after one period, and a moving average forgets at once", () => {
    expect(halfLife({ phi: [0.5] })).toBeCloseTo(1, 14);
    expect(halfLife({ theta: [0.8] })).toBe(0);
  });

  it("long-run variance of an AR(1) is sigma2 / (1 - phi^2)", () => {
    const found = longRun({ phi: [0.6], sigma2: 2, mean: 5 });
    expect(found.mean).toBe(5);
    expect(found.variance).toBeCloseTo(2 / (1 - 0.36), 13);
  });

  it("refuses correlations of a process that is not stationary", () => {
    expect(() => theoreticalAcf({ phi: [1] }, 5)).toThrow(/not stationary/);
  });
});

describe("roots", () => {
  it("finds roots worked out by hand", () => {
    // (1 - 0.5 B)(1 + 0.25 B)(1 - 0.8 B): roots 2, -4, 1.25
    const found = roots([-1.05, 0.075 + 0, 0.1]);
    expect(found.map(r => r.modulus).every(Number.isFinite)).toBe(true);
    for (const r of found) {
      // The polynomial vanishes at each root.
      const p = (re: number, im: number) => [1.05, -0.075, -0.1].reduce(([sr, si, br, bi], c) => { const nr = br * re - bi * im, ni = br * im + bi * re; return [sr - c * nr, si - c * ni, nr, ni]; }, [1, 0, 1, 0]);
      const [re, im] = p(r.re, r.im);
      expect(Math.hypot(re, im)).toBeLessThan(1e-12);
    }
  });

  it("keeps a seasonal polynomial's circle of roots", () => {
    const c = new Float64Array(24);
    c[11] = -0.6;
    const found = roots(c);
    expect(found).toHaveLength(12);
    for (const r of found) expect(r.modulus).toBeCloseTo(0.6 ** (-1 / 12), 13);
  });

  it("gives conjugate pairs exactly", () => {
    const z = inverseRoots([0.3, 0.5, -0.1, 0.2, 0.05]);
    const sum = z.im.reduce((a, b) => a + b, 0);
    expect(sum).toBe(0);
  });

  it("has no roots without coefficients", () => { expect(roots([0, 0])).toEqual([]); });
});

describe("simulate", () => {
  it("is the same for the same seed and different for another", () => {
    const a = simulate({ phi: [0.7], theta: [0.2] }, 50, 3), b = simulate({ phi: [0.7], theta: [0.2] }, 50, 3);
    expect([...a.values]).toEqual([...b.values]);
    expect([...simulate({ phi: [0.7], theta: [0.2] }, 50, 4).values]).not.toEqual([...a.values]);
  });

  it("starts in the stationary distribution: the first value has the long-run variance", () => {
    const model = { phi: [0.9], sigma2: 1, mean: 10 };
    let sum = 0, squares = 0;
    const runs = 4000;
    for (let seed = 1; seed <= runs; seed++) { const v = simulate(model, 1, seed).values[0]; sum += v; squares += (v - 10) ** 2; }
    const variance = 1 / (1 - 0.81);
    // Four standard errors of a mean and of a variance of normal draws.
    expect(Math.abs(sum / runs - 10)).toBeLessThan(4 * Math.sqrt(variance / runs));
    expect(Math.abs(squares / runs - variance)).toBeLessThan(4 * variance * Math.sqrt(2 / runs));
  });
});

describe("inverseRoots near a multiple root", () => {
  it("stops where only rounding moves, and so costs little more than for roots that stand apart", () => {
    const least = (c: readonly number[]): number => {
      let best = Infinity;
      for (let round = 0; round < 400; round++) {
        const began = performance.now();
        for (let k = 0; k < 10; k++) inverseRoots(c);
        best = Math.min(best, performance.now() - began);
      }
      return best;
    };
    // (1 - 0.998 B)^3 nearly; its iteration once ran to its limit of 200 rounds, 19 times the cost of the other.
    expect(least([-3, 2.989, -0.9959])).toBeLessThan(6 * least([1.2, 0.5, 0.2]));
  });
});
