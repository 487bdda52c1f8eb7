import { describe, expect, it } from "vitest";
import { quasiNewton, type Problem } from "../../../stdlib/optimize/quasiNewton.ts";

/** The curved valley of Rosenbrock (1960), minimum 0 at (1, 1); counts what it is asked. */
function valley(): Problem & { asked: number } {
  let x = 0, y = 0;
  return {
    size: 2, asked: 0,
    value(at) { this.asked++; [x, y] = at; return (1 - x) ** 2 + 100 * (y - x * x) ** 2; },
    gradientInto(g) { g[0] = -2 * (1 - x) - 400 * x * (y - x * x); g[1] = 200 * (y - x * x); },
    curvatureInto(h) { h.set([1, 0, 0, 1]); },
  };
}

describe("quasiNewton", () => {
  it("finds the end of a curved valley", () => {
    const found = quasiNewton(valley(), Float64Array.of(-1.2, 1), 1e-14);
    expect(found.converged).toBe(true);
    expect(Math.abs(found.x[0] - 1)).toBeLessThan(1e-6);
    expect(Math.abs(found.x[1] - 1)).toBeLessThan(1e-6);
  });

  it("goes on from where it stopped, with what it has learnt", () => {
    const whole = quasiNewton(valley(), Float64Array.of(-1.2, 1), 1e-14);
    const problem = valley();
    const first = quasiNewton(problem, Float64Array.of(-1.2, 1), 1e-14, 8), asked = problem.asked;
    const rest = quasiNewton(problem, first, 1e-14);
    expect(first.converged).toBe(false);
    expect(rest.converged).toBe(true);
    expect([...rest.x]).toEqual([...whole.x]);
    expect(rest.passes).toBe(problem.asked - asked);
    expect(first.passes + rest.passes).toBe(whole.passes);
  });
});
