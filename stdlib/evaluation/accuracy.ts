// Measures of forecast accuracy. An error is actual less forecast; pairs with a missing value are left out.

import { valuesOf, type Series } from "../series/series.ts";

export type Numbers = Series | ArrayLike<number>;

/** Mean error, actual less forecast: above 0 when the forecasts were too low. */
export const bias = (actual: Numbers, forecast: Numbers): number => meanOf("bias", actual, forecast, (y, f) => y - f);

/** Mean absolute error, unit of the data. */
export const mae = (actual: Numbers, forecast: Numbers): number => meanOf("mae", actual, forecast, (y, f) => Math.abs(y - f));

/** Root of the mean squared error, unit of the data. */
export const rmse = (actual: Numbers, forecast: Numbers): number => Math.sqrt(meanOf("rmse", actual, forecast, (y, f) => (y - f) ** 2));

/** Mean percentage error, in percent of the actual values; NaN where an actual value is 0. */
export const mpe = (actual: Numbers, forecast: Numbers): number => meanOf("mpe", actual, forecast, (y, f) => (y === 0 ? NaN : (100 * (y - f)) / y), false);

/** Mean absolute percentage error, in percent of the actual values; NaN where an actual value is 0. */
export const mape = (actual: Numbers, forecast: Numbers): number => meanOf("mape", actual, forecast, (y, f) => (y === 0 ? NaN : Math.abs((100 * (y - f)) / y)), false);

/** Symmetric form: 100 times the mean of 2|e| / (|y| + |f|), in percent. Source: the form of Makridakis & Hibon (2000). */
export const smape = (actual: Numbers, forecast: Numbers): number =>
  meanOf("smape", actual, forecast, (y, f) => (y === 0 && f === 0 ? 0 : (200 * Math.abs(y - f)) / (Math.abs(y) + Math.abs(f))));

/** Mean absolute scaled error: the MAE over the mean |y(t) - y(t - length)| of the training data. Below 1 is better
 *  than the (seasonal) naive rule did one step ahead in the training data. Source: Hyndman & Koehler (2006).
 *  @param length  periods a season; 1 compares with the plain naive rule
 *  @example mase([3, -0.5, 2, 7], [2.5, 0, 2, 8], [1, 2, 4, 5, 7], 1) // 0.3333 */
export const mase = (actual: Numbers, forecast: Numbers, training: Numbers, length = 1): number =>
  mae(actual, forecast) / naiveScale(training, length).absolute;

/** Root mean squared scaled error: the RMSE over the root of the mean squared seasonal difference of the training data. */
export const rmsse = (actual: Numbers, forecast: Numbers, training: Numbers, length = 1): number =>
  rmse(actual, forecast) / naiveScale(training, length).rootSquared;

/** In-sample errors of the seasonal naive rule, which MASE and RMSSE are measured in; NaN where they are 0 or none. */
export function naiveScale(training: Numbers, length: number): { readonly absolute: number; readonly rootSquared: number } {
  if (!Number.isInteger(length) || length < 1) throw new RangeError(`mase: length is ${length}, expected a whole number of periods from 1 on`);
  const y = valuesOf(training);
  let absolute = 0, squared = 0, count = 0;
  for (let t = length; t < y.length; t++) {
    const d = y[t] - y[t - length];
    if (Number.isNaN(d)) continue;
    absolute += Math.abs(d); squared += d * d; count++;
  }
  if (count === 0 || squared === 0) return { absolute: NaN, rootSquared: NaN };
  return { absolute: absolute / count, rootSquared: Math.sqrt(squared / count) };
}

function meanOf(what: string, actual: Numbers, forecast: Numbers, loss: (y: number, f: number) => number, skipLossNaN = true): number {
  const y = valuesOf(actual), f = valuesOf(forecast);
  if (y.length !== f.length) throw new RangeError(`${what}: ${y.length} actual values and ${f.length} forecasts; the two must be of one length`);
  let sum = 0, count = 0;
  for (let t = 0; t < y.length; t++) {
    if (Number.isNaN(y[t]) || Number.isNaN(f[t])) continue;
    const value = loss(y[t], f[t]);
    if (skipLossNaN && Number.isNaN(value)) continue;
    sum += value; count++;
  }
  return count === 0 ? NaN : sum / count;
}
