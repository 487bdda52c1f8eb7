// The innermost loops: filters over sparse lag sets. Everything slow is here, so everything fast must be here.
//
// A lag polynomial is a pair (lags, coefficients) without its leading 1; `coefficients` are those of
// x_t - sum c_i x_{t-lag_i} for the autoregressive side and of x_t + sum c_j x_{t-lag_j} for the moving-average side.
// Values before the start are zero throughout. Shapes with one to three lags have loops of their own: measured, the general
// loop over lags costs three times as much a step.

type Lags = Int32Array;

/** out_t = x_t - sum c_i x_{t-lag_i}, t in 0..n-1. `out` and `x` must differ. */
export function subtractLagsInto(out: Float64Array, x: Float64Array, n: number, lags: Lags, c: Float64Array): void {
  const count = lags.length;
  if (count === 0) { for (let t = 0; t < n; t++) out[t] = x[t]; return; }
  const head = Math.min(n, lags[count - 1]);
  for (let t = 0; t < head; t++) {
    let sum = x[t];
    for (let i = 0; i < count && lags[i] <= t; i++) sum -= c[i] * x[t - lags[i]];
    out[t] = sum;
  }
  const l0 = lags[0], c0 = c[0];
  if (count === 1) { for (let t = head; t < n; t++) out[t] = x[t] - c0 * x[t - l0]; return; }
  const l1 = lags[1], c1 = c[1];
  if (count === 2) { for (let t = head; t < n; t++) out[t] = x[t] - c0 * x[t - l0] - c1 * x[t - l1]; return; }
  const l2 = lags[2], c2 = c[2];
  if (count === 3) { for (let t = head; t < n; t++) out[t] = x[t] - c0 * x[t - l0] - c1 * x[t - l1] - c2 * x[t - l2]; return; }
  for (let t = head; t < n; t++) {
    let sum = x[t] - c0 * x[t - l0] - c1 * x[t - l1] - c2 * x[t - l2];
    for (let i = 3; i < count; i++) sum -= c[i] * x[t - lags[i]];
    out[t] = sum;
  }
}

/** Solves x_t + sum c_j x_{t-lag_j} = (x_t as given) forwards, in place: division by 1 + sum c_j B^lag_j. */
export function divideInto(x: Float64Array, n: number, lags: Lags, c: Float64Array): void {
  const count = lags.length;
  if (count === 0) return;
  const head = Math.min(n, lags[count - 1]);
  for (let t = 0; t < head; t++) {
    let sum = x[t];
    for (let j = 0; j < count && lags[j] <= t; j++) sum -= c[j] * x[t - lags[j]];
    x[t] = sum;
  }
  const l0 = lags[0], c0 = c[0];
  if (count === 1) {
    if (l0 === 1) {
      let last = head > 0 ? x[head - 1] : 0;
      for (let t = head; t < n; t++) { last = x[t] - c0 * last; x[t] = last; }
      return;
    }
    for (let t = head; t < n; t++) x[t] -= c0 * x[t - l0];
    return;
  }
  const l1 = lags[1], c1 = c[1];
  if (count === 2) {
    if (l0 === 1 && l1 === 2) {
      let last = head > 0 ? x[head - 1] : 0, older = head > 1 ? x[head - 2] : 0;
      for (let t = head; t < n; t++) { const now = x[t] - c1 * older - c0 * last; x[t] = now; older = last; last = now; }
      return;
    }
    for (let t = head; t < n; t++) x[t] = x[t] - c1 * x[t - l1] - c0 * x[t - l0];
    return;
  }
  const l2 = lags[2], c2 = c[2];
  if (count === 3) { for (let t = head; t < n; t++) x[t] = x[t] - c2 * x[t - l2] - c1 * x[t - l1] - c0 * x[t - l0]; return; }
  for (let t = head; t < n; t++) {
    let sum = x[t] - c2 * x[t - l2] - c1 * x[t - l1];
    for (let j = 3; j < count; j++) sum -= c[j] * x[t - lags[j]];
    x[t] = sum - c0 * x[t - l0];
  }
}

/** The transposed division: solves x_t + sum c_j x_{t+lag_j} = (x_t as given) backwards from the end, in place. */
export function divideBackInto(x: Float64Array, n: number, lags: Lags, c: Float64Array): void {
  const count = lags.length;
  if (count === 0) return;
  const longest = lags[count - 1];
  const body = Math.max(0, n - longest);
  for (let t = n - 1; t >= body; t--) {
    let sum = x[t];
    for (let j = 0; j < count && t + lags[j] < n; j++) sum -= c[j] * x[t + lags[j]];
    x[t] = sum;
  }
  const l0 = lags[0], c0 = c[0];
  if (count === 1) {
    if (l0 === 1) {
      let last = body < n ? x[body] : 0;
      for (let t = body - 1; t >= 0; t--) { last = x[t] - c0 * last; x[t] = last; }
      return;
    }
    for (let t = body - 1; t >= 0; t--) x[t] -= c0 * x[t + l0];
    return;
  }
  const l1 = lags[1], c1 = c[1];
  if (count === 2) { for (let t = body - 1; t >= 0; t--) x[t] = x[t] - c1 * x[t + l1] - c0 * x[t + l0]; return; }
  const l2 = lags[2], c2 = c[2];
  if (count === 3) { for (let t = body - 1; t >= 0; t--) x[t] = x[t] - c2 * x[t + l2] - c1 * x[t + l1] - c0 * x[t + l0]; return; }
  for (let t = body - 1; t >= 0; t--) {
    let sum = x[t] - c2 * x[t + l2] - c1 * x[t + l1];
    for (let j = 3; j < count; j++) sum -= c[j] * x[t + lags[j]];
    x[t] = sum - c0 * x[t + l0];
  }
}

/** sum over t of a_t b_t, t in 0..n-1; four partial sums, for speed and for digits. */
export function dot(a: Float64Array, b: Float64Array, n: number): number {
  let s0 = 0, s1 = 0, s2 = 0, s3 = 0, t = 0;
  for (; t + 3 < n; t += 4) {
    s0 += a[t] * b[t]; s1 += a[t + 1] * b[t + 1]; s2 += a[t + 2] * b[t + 2]; s3 += a[t + 3] * b[t + 3];
  }
  for (; t < n; t++) s0 += a[t] * b[t];
  return (s0 + s1) + (s2 + s3);
}

/** sum over t of a_t b_{t-lag}, t in lag..n-1. */
export function lagDot(a: Float64Array, b: Float64Array, n: number, lag: number): number {
  let s0 = 0, s1 = 0, s2 = 0, s3 = 0, t = lag;
  for (; t + 3 < n; t += 4) {
    s0 += a[t] * b[t - lag]; s1 += a[t + 1] * b[t + 1 - lag]; s2 += a[t + 2] * b[t + 2 - lag]; s3 += a[t + 3] * b[t + 3 - lag];
  }
  for (; t < n; t++) s0 += a[t] * b[t - lag];
  return (s0 + s1) + (s2 + s3);
}
