import { describe, expect, it } from "vitest";
import { gradientInto } from "../../../stdlib/arma/gradient.ts";
import { valueAt } from "../../../stdlib/arma/likelihood.ts";
import { makeWork, type Data } from "../../../stdlib/arma/work.ts";
import { makeShape, type Shape } from "../../../stdlib/arma/shape.ts";
import { agree, type Case, coefficients, differenced, readCases, readValues, regressors, transformed } from "./cases.ts";

// The one case with a moving-average root inside the circle is the filter's (see fit.test.ts): the recursion would explode.
const cases = readCases("arima_loglik").filter(c => c.id !== "arimaLogLik-sim_nearnoninv-5");

export function caseShape(c: Case): Shape {
  const m = c.inputs.model, s = m.seasonal;
  return makeShape(m.arLags, (s?.arLags ?? []), m.maLags, (s?.maLags ?? []), s?.period ?? 1);
}

/** Differenced series less its mean and regressors at the case's parameters, and pulses for the missing values. */
function caseData(c: Case): Data {
  const m = c.inputs.model, p = c.inputs.params!;
  const levels = transformed(readValues(c.series!), c.transform);
  const columns: Float64Array[] = [];
  const filled = Float64Array.from(levels);
  regressors(m, levels.length).forEach((x, j) => { for (let t = 0; t < filled.length; t++) filled[t] -= p.beta![j] * x[t]; });
  for (let t = 0; t < levels.length; t++) {
    if (!Number.isNaN(levels[t])) continue;
    filled[t] = 0;
    const pulse = new Float64Array(levels.length);
    pulse[t] = 1;
    columns.push(differenced(pulse, m));
  }
  const y = differenced(filled, m).map(v => v - (p.constant ?? 0));
  return { n: y.length, y, columns, gaps: columns.length, sigma2: null };
}

describe("exact likelihood", () => {
  for (const c of cases) {
    it(`${c.id} agrees with the dense Gaussian density`, () => {
      const data = caseData(c);
      const work = makeWork(caseShape(c), data);
      const x = coefficients(c.inputs.params!);
      const value = valueAt(work, data, x);
      agree(c, "logLikConcentrated", -value);
      agree(c, "sigma2Hat", work.sigma2);
      const fixed = valueAt(work, { ...data, sigma2: c.inputs.params!.sigma2! }, x);
      agree(c, "logLik", -fixed);
    });
  }
});

describe("gradient", () => {
  for (const c of cases) {
    it(`${c.id}: reverse mode agrees with differences`, () => {
      const data = caseData(c);
      const work = makeWork(caseShape(c), data);
      const x = coefficients(c.inputs.params!);
      const gradient = new Float64Array(x.length);
      valueAt(work, data, x);
      gradientInto(work, data, x, gradient);
      for (let i = 0; i < x.length; i++) {
        // No one step suits all: near the edge of the region the likelihood bends sharply, elsewhere rounding wants a long one.
        let best = Infinity;
        for (const h of [1e-3, 1e-4, 1e-5, 1e-7, 1e-9]) {
          const at = (step: number) => valueAt(work, data, x.map((v, j) => j === i ? v + step * h : v));
          const slope = (8 * (at(1) - at(-1)) - (at(2) - at(-2))) / (12 * h);
          if (Number.isFinite(slope)) best = Math.min(best, Math.abs(slope - gradient[i]) / (Math.abs(slope) + Math.abs(gradient[i]) + 1));
        }
        expect(best, `coefficient ${i}`).toBeLessThan(2e-6);
      }
    });
  }
});
