// Coefficients by lag of which most are 0: what a recursion through differences and seasons is made of.

export interface Sparse { readonly lags: Int32Array; readonly values: Float64Array; /** The longest lag; 0 without one. */ readonly reach: number }

/** The coefficients that are not 0, of an array that starts at lag 1. */
export function sparse(c: Float64Array): Sparse {
  const at = [...c.keys()].filter((i) => c[i] !== 0);
  return { lags: Int32Array.from(at, (i) => i + 1), values: Float64Array.from(at, (i) => c[i]), reach: at.length > 0 ? at[at.length - 1] + 1 : 0 };
}

/** Sum of the coefficients times the values so many periods before t; before the start there is nothing. */
export function lagged({ lags, values }: Sparse, x: Float64Array, t: number): number {
  let sum = 0;
  for (let i = 0; i < lags.length && lags[i] <= t; i++) sum += values[i] * x[t - lags[i]];
  return sum;
}
