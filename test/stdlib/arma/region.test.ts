import { describe, expect, it } from "vitest";
import { isStable, nearestRoot, stabilityTest } from "../../../stdlib/arma/region.ts";
import { roots } from "../../../stdlib/arma/roots.ts";
import { makeShape } from "../../../stdlib/arma/shape.ts";

const triangle = [[0.5, 0.3], [-0.5, 0.3], [1.2, -0.45], [-1.2, -0.9], [0, -0.5], [0, 0.5], [0.9, 0.1], [0, 0], [1.5, 0.2]] as const;

describe("nearestRoot", () => {
  it.each(triangle)("of a factor of the second order with %d and %d is the smallest modulus of its roots, on either side", (a, b) => {
    const shape = makeShape([1, 2], [], [1, 2], [], 1), x = Float64Array.of(a, b, a, b);
    expect(nearestRoot(shape.factors[0], x)).toBeCloseTo(roots([-a, -b])[0]?.modulus ?? Infinity, 12);
    expect(nearestRoot(shape.factors[2], x)).toBeCloseTo(roots([a, b])[0]?.modulus ?? Infinity, 12);
  });

  it("counts in the factor's own step", () => {
    const shape = makeShape([], [1], [], [], 12);
    expect(nearestRoot(shape.factors[1], Float64Array.of(-0.8))).toBeCloseTo(1.25, 12);
  });
});

describe("stabilityTest", () => {
  const lags = [1, 3, 4], test = stabilityTest(lags, 1, false, 0);
  const asked = [[0.5, 0.6, 0.3], [0.2, 0.1, 0.1], [1.8, -1.2, 0.3], [-0.9, 0.7, -0.6], [0.5, 0.6, -0.3]];
  const outside = (c: readonly number[]) => roots([-c[0], 0, -c[1], -c[2]])[0].modulus > 1;

  it("asked again and again says of each what its roots say", () => {
    expect(asked.map(test)).toEqual(asked.map(outside));
    expect(asked.map(test)).toEqual(asked.map(c => isStable(lags, c, 1)));
    expect(new Set(asked.map(outside)).size).toBe(2);
  });
});
