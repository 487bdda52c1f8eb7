import { tradingDays } from "../../../stdlib/forecast/interventions.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import { agree, caseCoefficients, caseHold, caseOptions, readCases } from "./cases.ts";

function finite(values: Float64Array): number[] { return [...values].filter(v => !Number.isNaN(v)); }

describe("fit at fixed parameters", () => {
  for (const c of readCases("arima_loglik")) {
    it(`${c.id}: likelihood, variance and residuals agree with the dense Gaussian density`, () => {
      const all = fit({ ...caseOptions(c), hold: caseHold(c) });
      agree(c, "logLik", all.logLikelihood);
      const { sigma2: _sigma2, ...hold } = caseHold(c);
      const concentrated = fit({ ...caseOptions(c), hold });
      agree(c, "logLikConcentrated", concentrated.logLikelihood);
      agree(c, "sigma2Hat", concentrated.sigma2);
      expect(all.n).toBe(c.expected.nUsed);
      const residuals = finite(all.residuals.values);
      agree(c, "stdInnovFirst", residuals);
      agree(c, "stdInnovLast", residuals.slice(-(c.expected.stdInnovLast as number[]).length));
    });
  }
});

describe("fit by maximum likelihood", () => {
  for (const c of readCases("arima_ml")) {
    it(`${c.id}: estimates, standard errors and criteria agree with the reference`, () => {
      const found = fit(caseOptions(c));
      agree(c, "logLik", found.logLikelihood);
      expect(found.converged).toBe(true);
      expect(found.n).toBe(c.expected.nUsed);
      expect(found.k).toBe(c.expected.k);
      agree(c, "coef", caseCoefficients(c, found), c.expected.coef, c.expected.se);
      agree(c, "sigma2", found.sigma2);
      for (const name of ["aic", "aicc", "bic"] as const) if (c.expected[name] !== undefined && c.expected[name] !== null) agree(c, name, found[name]);
      if (c.expected.se) agree(c, "se", caseCoefficients(c, found.se));
      const residuals = finite(found.residuals.values);
      if (c.expected.stdInnovFirst) agree(c, "stdInnovFirst", residuals);
      if (c.expected.stdInnovLast) agree(c, "stdInnovLast", residuals.slice(-(c.expected.stdInnovLast as number[]).length));
    });
  }

  it("asks for a name where regressors are one intervention instead of an object of them", () => {
    const series = makeSeries({ name: "y", every: "P1M", start: "2015-01", values: Array.from({ length: 60 }, (_, t) => 100 + ((t * 7919) % 13)) });
    expect(() => fit({ series, ar: 1, regressors: tradingDays() as never })).toThrow("without a name; give it one, as in {effect: tradingDays(…)}");
  });
});
