import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import { gridOfOrders, rankFits } from "../../../stdlib/evaluation/gridOfOrders.ts";
import { stepwiseOrders } from "../../../stdlib/evaluation/stepwiseOrders.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { applySteps } from "../../../stdlib/series/steps.ts";
import { referenceSeries } from "../forecast/reference.ts";

const lake = makeSeries({ name: "level", values: referenceSeries("lakehuron").values });

describe("gridOfOrders", () => {
  it("ranks all orders of a grid, with weights that add up to 1 and ties within 2", async () => {
    const grid = await gridOfOrders({ series: lake, ar: 2, ma: 2 });
    expect(grid.models.length).toBe(9);
    expect(grid.models.reduce((sum, m) => sum + m.weight, 0)).toBeCloseTo(1, 12);
    expect(grid.models.every((m, i) => i === 0 || m.aicc >= grid.models[i - 1].aicc)).toBe(true);
    expect(grid.models.filter((m) => m.tied).every((m) => m.difference <= 2)).toBe(true);
    // R 4.2.2: arima(LakeHuron, c(1, 0, 1)) and c(2, 0, 0): AIC 214.490521 and 215.266445.
    const aic = (ar: number, ma: number) => grid.models.find((m) => m.ar === ar && m.ma === ma)!.aic;
    expect(aic(1, 1)).toBeCloseTo(214.490521, 3);
    expect(aic(2, 0)).toBeCloseTo(215.266445, 3);
    expect(grid.best?.label).toBe(grid.models[0].fit.label);
    expect(grid.sentence).toContain("smallest AICc");
  });
  it("sets a model aside whose maximum lies on the region's edge, with the reason, and never chooses it over a proper one", async () => {
    // A simulated (0,1,1)(0,1,1)12 on which (2,1,3) gains 7 in log likelihood from a cycle on the unit circle; R's arima stops at 318.47.
    const values = readFileSync(new URL("../../fixtures/maximum-on-the-edge.csv", import.meta.url), "utf8").trim().split("\n").slice(1).map((line) => Number(line.split(",")[1]));
    const series = applySteps(makeSeries({ name: "vehicles", every: "P1M", start: "2010-01", values }), [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]);
    const grid = await gridOfOrders({ series, ar: 2, ma: 3, season: { length: 12, ma: [1] } });
    const aside = grid.models.filter((m) => m.setAside !== null), edge = aside.find((m) => m.ar === 2 && m.ma === 3)!;
    expect(edge.setAside).toContain("unit circle");
    expect(edge.aicc).toBeLessThan(grid.best!.aicc);
    expect(edge).toMatchObject({ tied: false, weight: 0 });
    expect(grid.best).toMatchObject({ setAside: null, rank: 1, difference: 0 });
    expect(grid.models[0]).toBe(edge);
    expect(grid.models.filter((m) => m.setAside === null).reduce((sum, m) => sum + m.weight, 0)).toBeCloseTo(1, 12);
    expect(grid.notes.join(" ")).toContain("cannot rank");
    // The smallest of all belongs to one set aside: the sentence speaks of the others.
    expect(grid.sentence).toMatch(new RegExp(`^Of ${grid.models.length - aside.length} models that can be ranked, `));
  });
  it("a list tries just its items, subset lags too", async () => {
    const grid = await gridOfOrders({ series: lake, ar: [1, [1, 3]], ma: [0], rank: "bic" });
    expect(grid.models.map((m) => JSON.stringify(m.ar)).sort()).toEqual(["1", "[1,3]"]);
  });
  it("lists orders that cannot be estimated with the reason, and keeps what is done when stopped", async () => {
    const short = makeSeries({ name: "s", values: [1, 3, 2, 5, 4, 6, 5, 8] });
    const grid = await gridOfOrders({ series: short, ar: [1, 7] });
    expect(grid.failures.length).toBe(1);
    expect(grid.failures[0].reason.length).toBeGreaterThan(10);
    let done = 0;
    const part = await gridOfOrders({ series: lake, ar: 3 }, { progress: (n) => { done = n; }, stopped: () => done >= 2 });
    expect(part).toMatchObject({ complete: false, tried: 2, asked: 4 });
  });
});

describe("rankFits", () => {
  it("refuses to rank across different differencing, and says why", () => {
    const a = fit({ series: lake, ar: 1 }), b = fit({ series: applySteps(lake, [{ step: "difference", lag: 1 }]), ma: 1 });
    expect(() => rankFits({ a, b })).toThrow(/likelihoods are of different data/);
    expect(() => rankFits({ a, c: fit({ series: lake, ar: 1, window: { from: "5" } }) })).toThrow(/same observations only/);
    expect(rankFits({ a, d: fit({ series: lake, ar: 2 }) }).models.length).toBe(2);
  });
});

describe("stepwiseOrders", () => {
  it("finds the airline model among 324 orders in a few dozen fits, and keeps its path", async () => {
    const { times, values } = referenceSeries("airline");
    const series = applySteps(makeSeries({ name: "passengers", every: "P1M", start: times[0], values }), [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]);
    const found = await stepwiseOrders({ series, season: {} });
    // The usual choice for this series: (0,1,1)(0,1,1)12, Box & Jenkins (1976), chapter 9.
    expect(found.best).toMatchObject({ ar: 0, ma: 1, seasonalAr: 0, seasonalMa: 1 });
    expect(found.tried).toBeLessThan(40);
    expect(found.path.length).toBe(found.tried);
    expect(found.path.filter((s) => s.moved).at(-1)!.value).toBe(found.best!.aicc);
    expect(found.notes.at(-1)).toContain("of 324 orders");
  });
  it("stays within its bounds, without a season too, and keeps what is done when stopped", async () => {
    const found = await stepwiseOrders({ series: lake, ar: 1, ma: 1 });
    expect(found.models.every((m) => Number(m.ar) <= 1 && Number(m.ma) <= 1)).toBe(true);
    expect(found.best).toMatchObject({ ar: 1, ma: 1 });
    let done = 0;
    const part = await stepwiseOrders({ series: lake }, { progress: (n) => { done = n; }, stopped: () => done >= 2 });
    expect(part).toMatchObject({ complete: false, tried: 2 });
  });
});
