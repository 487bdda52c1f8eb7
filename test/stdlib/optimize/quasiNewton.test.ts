import { describe, expect, it } from "vitest";
import { newtonStep, quasiNewton } from "../../../stdlib/optimize/quasiNewton.ts";
import type { Problem } from "../../../stdlib/optimize/quasiNewton.ts";

// One table of problems; each is met whole.

/** A problem from a value and a gradient; its first curvature is what `curvature` says on the diagonal. */
function problemOf(size: number, value: (x: Float64Array) => number, gradient: (x: Float64Array) => readonly number[], curvature = 1): Problem {
  let last = new Float64Array(size);
  return {
    size,
    value: (x) => { last = Float64Array.from(x); return value(x); },
    gradientInto: (g) => g.set(gradient(last)),
    curvatureInto: (h) => { h.fill(0); for (let i = 0; i < size; i++) h[i * size + i] = curvature; },
  };
}

const table: readonly { readonly title: string; readonly problem: Problem; readonly start: readonly number[]; readonly least: readonly number[] }[] = [
  { title: "a bowl", problem: problemOf(2, ([a, b]) => (a - 1) ** 2 + 3 * (b + 2) ** 2, ([a, b]) => [2 * (a - 1), 6 * (b + 2)]), start: [0, 0], least: [1, -2] },
  // Rosenbrock (1960): a curved valley with its lowest point at (1, 1).
  { title: "a curved valley", problem: problemOf(2, ([a, b]) => 100 * (b - a * a) ** 2 + (1 - a) ** 2, ([a, b]) => [-400 * a * (b - a * a) - 2 * (1 - a), 200 * (b - a * a)], 100), start: [-1.2, 1], least: [1, 1] },
  { title: "a bowl with an edge beside its lowest point", problem: problemOf(1, ([a]) => (a < 0.5 ? (a - 0.49) ** 2 : Infinity), ([a]) => [2 * (a - 0.49)]), start: [-3], least: [0.49] },
];

describe("quasiNewton", () => {
  it.each(table)("finds the lowest point of $title", ({ problem, start, least }) => {
    const found = quasiNewton(problem, Float64Array.from(start), 1e-14);
    expect(found.converged).toBe(true);
    found.x.forEach((v, i) => expect(v).toBeCloseTo(least[i], 5));
  });

  it.each([Infinity, NaN, 0, -5, 1e300])("ends, and still goes down, where the first curvature is %d", (curvature) => {
    const problem = problemOf(2, ([a, b]) => a * a + b * b, ([a, b]) => [2 * a, 2 * b], curvature);
    const found = quasiNewton(problem, Float64Array.of(1, 1));
    expect(found.value).toBeLessThanOrEqual(2);
  });

  it("says that it did not converge where it starts outside", () => {
    expect(quasiNewton(problemOf(1, () => Infinity, () => [0]), Float64Array.of(1))).toMatchObject({ converged: false, passes: 1 });
  });

  it("goes on from where it stopped, with what it has learnt", () => {
    const { problem, start } = table[1], whole = quasiNewton(problem, Float64Array.from(start), 1e-14);
    const first = quasiNewton(problem, Float64Array.from(start), 1e-14, 8), rest = quasiNewton(problem, first, 1e-14);
    expect(first.converged).toBe(false);
    expect(rest.converged).toBe(true);
    expect([...rest.x]).toEqual([...whole.x]);
    expect(first.passes + rest.passes).toBe(whole.passes);
  });
});

describe("newtonStep", () => {
  it("leads from where a search stopped to the lowest point of a bowl whose curvature it knows", () => {
    const bowl = problemOf(2, ([a, b]) => (a - 1) ** 2 + (b + 2) ** 2, ([a, b]) => [2 * (a - 1), 2 * (b + 2)], 2);
    const stopped = quasiNewton(bowl, Float64Array.of(0, 0), 1e-14, 0), step = newtonStep(stopped);
    expect(stopped.x[0] + step[0]).toBeCloseTo(1, 12);
    expect(stopped.x[1] + step[1]).toBeCloseTo(-2, 12);
    expect([...stopped.hessian]).toEqual([2, 0, 0, 2]);
  });
});
