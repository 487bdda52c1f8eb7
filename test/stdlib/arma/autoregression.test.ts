import { describe, expect, it } from "vitest";
import { autoregressionByLeastSquares, burg, yuleWalker } from "../../../stdlib/arma/autoregression.ts";
import { fit } from "../../../stdlib/arma/fit.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { agree, caseCoefficients, caseHold, caseOptions, type Case, readCases, readValues, transformed } from "./cases.ts";

const cases = readCases("ar_css");

function centred(c: Case): { y: Float64Array; mean: number } {
  const x = transformed(readValues(c.series!), c.transform);
  const mean = x.reduce((a, b) => a + b, 0) / x.length;
  return { y: x.map(v => v - mean), mean };
}

describe("autoregressions", () => {
  for (const c of cases.filter(k => k.what === "arYuleWalker")) {
    it(`${c.id}: Yule-Walker agrees with the reference`, () => {
      const { y } = centred(c), order = c.inputs.order!;
      const found = yuleWalker(y, order);
      agree(c, "ar", found.phi);
      agree(c, "sigma2", found.sigma2[order]);
      agree(c, "sigma2DfAdjusted", found.sigma2[order] * y.length / (y.length - order - 1));
      const whole = fit({ series: makeSeries({ name: c.series!, values: transformed(readValues(c.series!), c.transform) }), ar: order, method: "yuleWalker" });
      agree(c, "ar", whole.phi);
      agree(c, "mean", whole.mean);
      agree(c, "sigma2", whole.sigma2);
      if (c.expected.se) agree(c, "se", whole.se.phi);
    });
  }
  for (const c of cases.filter(k => k.what === "arBurg")) {
    it(`${c.id}: Burg agrees with the reference`, () => {
      const { y } = centred(c), order = c.inputs.order!;
      const found = burg(y, order);
      agree(c, "ar", found.phi);
      agree(c, "reflection", found.reflection);
      agree(c, "sigma2Levinson", found.sigma2[order]);
      agree(c, "sigma2Residual", found.residualVariance);
    });
  }
  for (const c of cases.filter(k => k.what === "arOls")) {
    it(`${c.id}: least squares agrees with the reference`, () => {
      const x = transformed(readValues(c.series!), c.transform), order = c.inputs.order!;
      const found = autoregressionByLeastSquares(x, Array.from({ length: order }, (_, i) => i + 1), true);
      agree(c, "ar", found.phi);
      agree(c, "intercept", found.intercept);
      agree(c, "sigma2", found.sigma2);
      agree(c, "se", found.se);
      const whole = fit({ series: makeSeries({ name: c.series!, values: x }), ar: order, method: "leastSquares" });
      agree(c, "ar", whole.phi);
      agree(c, "intercept", whole.constant);
    });
  }
  for (const c of cases.filter(k => k.what === "arOrderAic")) {
    it(`${c.id}: the order that AIC chooses agrees with the reference`, () => {
      const { y } = centred(c), most = c.inputs.maxOrder as number, n = y.length;
      const found = c.inputs.method === "burg" ? burg(y, most) : yuleWalker(y, most);
      const aic = found.sigma2.map((v, k) => n * Math.log(v) + 2 * k + 2);
      const least = Math.min(...aic);
      agree(c, "aicMinusMin", aic.map(v => v - least));
      expect(aic.indexOf(least)).toBe(c.expected.order);
    });
  }
});

describe("conditional sum of squares", () => {
  for (const c of cases.filter(k => k.what === "css")) {
    it(`${c.id}: agrees with the recursion of the reference`, () => {
      const given = c.inputs.params;
      const { sigma2: _s, ...hold } = given ? caseHold(c) : {};
      const found = fit({ ...caseOptions(c), method: "conditional", ...(given ? { hold } : {}) });
      agree(c, "sigma2", found.sigma2);
      if (c.expected.coef) agree(c, "coef", caseCoefficients(c, found), c.expected.coef);
      if (c.expected.sumOfSquares !== undefined) agree(c, "sumOfSquares", found.sigma2 * (c.expected.nUsed as number));
    });
  }
});
