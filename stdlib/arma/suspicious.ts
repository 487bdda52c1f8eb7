// Whether a maximum gives grounds to look for another.

import { nearestRoot } from "./region.ts";
import { inverseRoots } from "./roots.ts";
import { denseFactor, type Factor, type Shape } from "./shape.ts";

/** Several maxima are likely where a factor lies near the edge of the region, or where the two sides nearly cancel: where the
 *  data hardly tell a pair of factors from none (a chi-square of n d^2 / (1 - b^2), d the inverse roots' distance). */
export function suspicious(shape: Shape, x: Float64Array, n: number): { plain: boolean; seasonal: boolean } {
  const parts = shape.factors;
  const near = (i: number) => nearestRoot(parts[i], x);
  const mixed = (i: number) => parts[i].lags.length > 0 && parts[i + 2].lags.length > 0;
  return {
    plain: near(2) < 1.07 || (mixed(0) && (near(0) < 1.01 || pairStatistic(parts[0], parts[2], x, n) < 25)),
    seasonal: near(3) < 1.03 || (mixed(1) && (near(1) < 1.01 || pairStatistic(parts[1], parts[3], x, n) < 25)),
  };
}

function pairStatistic(ar: Factor, ma: Factor, x: Float64Array, n: number): number {
  const a = inverseRoots(denseFactor(ar, x)), b = inverseRoots(denseFactor(ma, x));
  let least = Infinity;
  for (let t = 0; t < b.re.length; t++) {
    const room = Math.max(1e-3, 1 - b.re[t] ** 2 - b.im[t] ** 2);
    for (let s = 0; s < a.re.length; s++) least = Math.min(least, n * ((a.re[s] - b.re[t]) ** 2 + (a.im[s] - b.im[t]) ** 2) / room);
  }
  return least;
}
