import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import type { Fit } from "../../../stdlib/arma/model.ts";
import { makeShape } from "../../../stdlib/arma/shape.ts";
import { simulate } from "../../../stdlib/arma/simulate.ts";
import { smallerOf } from "../../../stdlib/arma/smaller.ts";

const none = { standardErrors: false };
const series = simulate({ phi: [1.2, -0.45], theta: [0.5], mean: 5 }, 200, 2);
const orders = Array.from({ length: 25 }, (_, i) => ({ ar: Math.floor(i / 5), ma: i % 5 }));

describe("a search through orders that starts from what smaller ones found", () => {
  const smaller: Fit[] = [];
  for (const order of orders) smaller.push(fit({ series, ...order }, { ...none, smaller }));

  it("reaches what separate searches reach, and now and then more", () => {
    const gains = orders.map((order, i) => smaller[i].logLikelihood - fit({ series, ...order }, none).logLikelihood);
    expect(Math.min(...gains)).toBeGreaterThan(-1e-6);
  });

  it("never finds a larger model worse than one it contains", () => {
    // Separate searches of these orders end with (3,4) 0.01 below (3,3).
    orders.forEach((large, i) => orders.forEach((small, j) => {
      if (small.ar <= large.ar && small.ma <= large.ma) expect(smaller[i].logLikelihood, `(${large.ar},${large.ma}) beside (${small.ar},${small.ma})`).toBeGreaterThan(smaller[j].logLikelihood - 1e-6);
    }));
  });
});

describe("smallerOf", () => {
  const one = fit({ series, ar: 1 }, none), odd = fit({ series, ar: [1, 3] }, none), two = fit({ series, ar: 2, ma: 1 }, none);

  it("gives the best fit that a shape contains, by the shape's own lags", () => {
    const { within } = smallerOf([one, odd, two]);
    expect([...within(makeShape([1, 2, 3], [], [1], [], 1))!]).toEqual([...two.phi, 0, ...two.theta]);
    expect([...within(makeShape([1, 3], [], [], [], 1))!]).toEqual([odd.phi[0], odd.phi[2]]);
    expect(within(makeShape([2], [], [], [], 1))).toBeNull();
  });

  it("takes a fit for the maximum of a shape only where the lags are just the same", () => {
    const { of } = smallerOf([one, odd]);
    expect([...of(makeShape([1], [], [], [], 1))!]).toEqual([...one.phi]);
    expect(of(makeShape([1, 2, 3], [], [], [], 1))).toBeNull();
  });

  it("counts seasonal lags in seasons", () => {
    const monthly = fit({ series, ar: 1, season: { length: 12, ma: 1 } }, none);
    expect([...smallerOf([monthly]).within(makeShape([1], [], [1], [12], 12)) ?? []]).toEqual([]);
    expect([...smallerOf([monthly]).within(makeShape([1], [], [1], [1], 12))!]).toEqual([...monthly.phi, 0, ...monthly.seasonalTheta]);
  });
});
