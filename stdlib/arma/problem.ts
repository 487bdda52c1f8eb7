// The search's view of the likelihood: free coefficients alone, kept inside the region.

import { gaussNewtonInto } from "./gaussNewton.ts";
import { isStable, stabilityTest } from "./region.ts";
import { reflected } from "./roots.ts";
import type { Evaluate, Search } from "./search.ts";
import type { Work } from "./work.ts";
import type { Problem } from "../optimize/quasiNewton.ts";

/** @param free  positions of the coefficients that move; the others stay as `search` holds them */
export function makeProblem(search: Search, work: Work, free: Int32Array, evaluate: Evaluate): Problem {
  const { shape, held } = search;
  const parts = shape.factors;
  const x = held.slice(), gradient = new Float64Array(shape.count), views = parts.map(f => x.subarray(f.from, f.from + f.lags.length));
  const dense = parts.map(f => f.lags.length > 0 && f.lags[f.lags.length - 1] / f.lags[0] === f.lags.length
    && f.lags.every((_, i) => Number.isNaN(held[f.from + i])));
  // A moving average held outside the region is the author's wish (the likelihood is then the filter's).
  const whole = parts.map(f => f.sign < 0 && f.lags.every((_, i) => !Number.isNaN(held[f.from + i])));
  // Across the circle the likelihood goes on smoothly (it is that of the reflection), and so may the search, a little: as far
  // as the recursion's growth costs no digits. Turning back at the edge would cost it the curvature it has learnt.
  const slack = parts.map((f, p) => f.sign < 0 && dense[p] ? Math.min(0.05, 4 * f.lags[0] / search.data.n) : 0);
  const stable = parts.map((f, p) => stabilityTest(f.lags, f.sign, f.sign < 0, slack[p]));
  return {
    size: free.length,
    value(z) {
      for (let i = 0; i < free.length; i++) x[free[i]] = z[i];
      let mended = false;
      for (let p = 0; p < parts.length; p++) {
        const f = parts[p], c = views[p];
        if (whole[p] || stable[p](c)) continue;
        // Outside: the likelihood of a moving average is that of its reflection, so go on from there; a process that is not
        // stationary has none, and the step is shortened.
        if (f.sign > 0 || !dense[p]) return Infinity;
        c.set(reflected(c));
        if (!isStable(f.lags, c, f.sign, true)) return Infinity;
        mended = true;
      }
      if (mended) for (let i = 0; i < free.length; i++) z[i] = x[free[i]];
      return evaluate.value(x);
    },
    gradientInto(g) {
      evaluate.gradientInto(x, gradient);
      for (let i = 0; i < free.length; i++) g[i] = gradient[free[i]];
    },
    curvatureInto(h) { gaussNewtonInto(h, work, search.data, x, free); },
  };
}
