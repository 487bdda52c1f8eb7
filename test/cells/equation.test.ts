import temml from "temml";
import { describe, expect, test } from "vitest";
import { backshiftEquation, writtenOutEquation } from "../../cells/parts/equation.ts";
import { madeFit, madeSeries, stepped } from "./made.ts";

const none = new Float64Array(0);

describe("the equation of a fitted model", () => {
  test("is multiplied out by hand for a seasonal model of logs", () => {
    // (1 - B)(1 - B^12) log y = (1 - 0.402 B)(1 - 0.557 B^12) e: the product term is 0.402 * 0.557 = 0.2239
    const fit = madeFit();
    expect(backshiftEquation(fit).text).toMatch(/^\(1 - B\) \(1 - B\^12\) log y\[t\] = \(1 - 0\.402 B\) \(1 - 0\.557 B\^12\) e\[t\], var e = 0\.001348;/);
    expect(writtenOutEquation(fit).text).toBe("log y[t] = log y[t-1] + log y[t-12] - log y[t-13] + e[t] - 0.402 e[t-1] - 0.557 e[t-12] + 0.224 e[t-13]");
  });
  test("carries the mean on the left and the constant on the right", () => {
    const series = madeSeries();
    const fit = madeFit({ series, options: { series }, phi: Float64Array.of(0.5), theta: none, seasonalTheta: none, seasonLength: 0, mean: 10, constant: 5, sigma2: 4 });
    expect(backshiftEquation(fit).text).toContain("(1 - 0.500 B) (y[t] - 10.000) = e[t]");
    expect(writtenOutEquation(fit).text).toBe("y[t] = 5.000 + 0.500 y[t-1] + e[t]");
  });
  test("shows a negative autoregressive coefficient with a plus in the backshift form", () => {
    const series = madeSeries();
    const fit = madeFit({ series, options: { series }, phi: Float64Array.of(-0.3, 0, 0.25), theta: none, seasonalTheta: none, seasonLength: 0 });
    expect(backshiftEquation(fit).text).toContain("(1 + 0.300 B - 0.250 B^3) y[t] = e[t]");
    expect(writtenOutEquation(fit).text).toBe("y[t] = -0.300 y[t-1] + 0.250 y[t-3] + e[t]");
  });
  test("subtracts the regressors first, and keeps odd names out of TeX's way", () => {
    const fit = madeFit({ beta: { "fuel_price%": -0.2, storm: 0.1 } });
    const shown = writtenOutEquation(fit);
    expect(shown.text).toMatch(/^n\[t\] = log y\[t\] \+ 0\.200 fuel_price%\[t\] - 0\.100 storm\[t\]; n\[t\] = n\[t-1\]/);
    expect(shown.tex).toContain("\\text{fuel\\_price\\%}");
  });
  test("stands below each other where the sides are long, regressors on a line of their own", () => {
    const fit = madeFit({ beta: { price: -3.4, shift: 6.5, storm: -2.6, fuel: 1.2 }, phi: Float64Array.of(0.5, 0.2) });
    expect(backshiftEquation(fit).text).toMatch(/^n\[t\] = log y\[t\] \+ 3\.400 price\[t\] .*; \(1 - 0\.500 B - 0\.200 B\^2\) \(1 - B\) \(1 - B\^12\) n\[t\] = /);
    expect(backshiftEquation(fit).tex.split("\\\\")).toHaveLength(4);
    expect(backshiftEquation(madeFit()).tex).not.toContain("\\\\");
    expect(backshiftEquation(madeFit(), 340).tex).toContain("\\\\");
  });
  test("calls the modelled scale z where the steps have no short symbol", () => {
    const series = stepped(madeSeries(), [{ step: "perDay" }, { step: "log" }]);
    const fit = madeFit({ series, options: { series } });
    expect(backshiftEquation(fit).text).toMatch(/z is the log of crossings a day/);
  });
  test("is TeX that the typesetter accepts", () => {
    const perDay = stepped(madeSeries(), [{ step: "boxCox", lambda: 0.3 }, { step: "difference", lag: 1 }]);
    for (const fit of [madeFit(), madeFit({ beta: { "a^b~{c}\\d": 1e-7 } }), madeFit({ series: perDay, mean: 1e7, constant: 1e-9 })]) {
      for (const part of [backshiftEquation(fit), writtenOutEquation(fit)]) {
        expect(() => temml.renderToString(part.tex, { throwOnError: true, displayMode: true })).not.toThrow();
      }
    }
  });
});
