import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import type { Fit } from "../../../stdlib/arma/model.ts";
import { makeShape } from "../../../stdlib/arma/shape.ts";
import { simulate } from "../../../stdlib/arma/simulate.ts";
import { smallerFits, type Smaller } from "../../../stdlib/arma/smaller.ts";

const none = { standardErrors: false };
const series = simulate({ phi: [1.2, -0.45], theta: [0.5], mean: 5 }, 200, 2);
const orders = Array.from({ length: 25 }, (_, i) => ({ ar: Math.floor(i / 5), ma: i % 5 }));

describe("a search through orders that starts from what smaller ones found", () => {
  const smaller = smallerFits(), fits: Fit[] = [];
  for (const order of orders) { fits.push(fit({ series, ...order }, { ...none, smaller })); smaller.add(fits[fits.length - 1]); }

  it("reaches what separate searches reach, and now and then more", () => {
    const gains = orders.map((order, i) => fits[i].logLikelihood - fit({ series, ...order }, none).logLikelihood);
    expect(Math.min(...gains)).toBeGreaterThan(-1e-6);
  });

  it("never finds a larger model worse than one it contains", () => {
    // Separate searches of these orders end with (3,4) 0.01 below (3,3).
    orders.forEach((large, i) => orders.forEach((small, j) => {
      if (small.ar <= large.ar && small.ma <= large.ma) expect(fits[i].logLikelihood, `(${large.ar},${large.ma}) beside (${small.ar},${small.ma})`).toBeGreaterThan(fits[j].logLikelihood - 1e-6);
    }));
  });
});

describe("smallerFits", () => {
  const known = (...fits: readonly Fit[]): Smaller => { const smaller = smallerFits(); fits.forEach(smaller.add); return smaller; };
  const one = fit({ series, ar: 1 }, none), odd = fit({ series, ar: [1, 3] }, none), two = fit({ series, ar: 2, ma: 1 }, none);

  it("gives the best fit that a shape contains, by the shape's own lags", () => {
    const { within } = known(one, odd, two);
    expect([...within(makeShape([1, 2, 3], [], [1], [], 1))!]).toEqual([...two.phi, 0, ...two.theta]);
    expect([...within(makeShape([1, 3], [], [], [], 1))!]).toEqual([odd.phi[0], odd.phi[2]]);
    expect(within(makeShape([2], [], [], [], 1))).toBeNull();
  });

  it("takes a fit for the maximum of a shape only where the lags are just the same", () => {
    const { of } = known(one, odd);
    expect([...of(makeShape([1], [], [], [], 1))!]).toEqual([...one.phi]);
    expect(of(makeShape([1, 2, 3], [], [], [], 1))).toBeNull();
  });

  it("counts seasonal lags in seasons", () => {
    const monthly = fit({ series, ar: 1, season: { length: 12, ma: 1 } }, none);
    expect([...known(monthly).within(makeShape([1], [], [1], [12], 12)) ?? []]).toEqual([]);
    expect([...known(monthly).within(makeShape([1], [], [1], [1], 12))!]).toEqual([...monthly.phi, 0, ...monthly.seasonalTheta]);
  });
});
