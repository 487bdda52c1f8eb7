// The Durbin-Watson statistic, for those who are used to it; the portmanteau tests say more about a time-series model.

import type { Subject } from "./subject.ts";
import { testedOf } from "./subject.ts";

/** Sum of squared first differences over the sum of squares: near 2 without first-order autocorrelation, about 2(1 - r_1).
 *  Pairs with a gap are left out of the numerator. NaN where nothing varies about zero.
 *  Source: Durbin & Watson (1950).   @example durbinWatson([1, -1, 1, -1]) // 3 */
export function durbinWatson(x: Subject): number {
  const { values } = testedOf(x);
  let top = 0, bottom = 0;
  for (let t = 0; t < values.length; t++) {
    if (Number.isNaN(values[t])) continue;
    bottom += values[t] * values[t];
    if (t > 0 && !Number.isNaN(values[t - 1])) top += (values[t] - values[t - 1]) ** 2;
  }
  return bottom > 0 ? top / bottom : NaN;
}
