import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import { interpolate } from "../../../stdlib/arma/interpolate.ts";
import { predict } from "../../../stdlib/arma/predict.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { agree, caseHold, caseOptions, readCases } from "./cases.ts";

const cases = readCases("forecast");

describe("predict", () => {
  for (const c of cases.filter(k => k.what === "forecast")) {
    it(`${c.id}: conditional means and standard errors agree with the dense conditional Gaussian`, () => {
      const given = c.inputs.params;
      const found = fit({ ...caseOptions(c), ...(given ? { hold: caseHold(c) } : {}) });
      const horizon = c.inputs.horizon!;
      const p = predict(found, horizon);
      agree(c, "point", p.mean);
      agree(c, "se", p.se);
      let sum = 0;
      agree(c, "sePsi", p.psi.map(v => { sum += v * v; return Math.sqrt(found.sigma2 * sum); }));
      const covariance = p.covariance();
      for (let k = 0; k < horizon; k++) expect(Math.abs(Math.sqrt(covariance[k * horizon + k]) / p.se[k] - 1)).toBeLessThan(1e-12);
    });
  }

  it("a random walk's forecast errors have covariance sigma2 times the smaller horizon", () => {
    const values = [3, 1, 4, 1, 5, 9, 2, 6, 5, 3, 5, 8];
    const walk = makeSeries({ name: "walk", values });
    const steps = [{ step: "difference" as const, lag: 1, before: walk }];
    const w = makeSeries({ name: "walk", start: "2", values: values.slice(1).map((v, i) => v - values[i]), steps });
    const found = fit({ series: w });
    const c = predict(found, 3).covariance();
    for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) expect(c[i * 3 + j]).toBeCloseTo(found.sigma2 * (Math.min(i, j) + 1), 10);
    expect([...predict(found, 2).mean]).toEqual([8, 8]);
  });
});

describe("interpolate", () => {
  for (const c of cases.filter(k => k.what === "interpolate")) {
    it(`${c.id}: conditional means and standard errors of the missing values agree`, () => {
      const found = fit({ ...caseOptions(c), ...(c.inputs.params ? { hold: caseHold(c) } : {}) });
      const gaps = interpolate(found);
      const rows = c.expected.rows as number[];
      const at = rows.map(r => gaps.positions.indexOf(r - 1));
      expect(at.every(i => i >= 0)).toBe(true);
      agree(c, "value", at.map(i => gaps.mean[i]));
      agree(c, "se", at.map(i => gaps.se[i]));
    });
  }
});
