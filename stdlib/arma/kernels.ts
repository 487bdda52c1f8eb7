// The innermost loops: filters over sparse lag sets. Everything slow is here, so everything fast must be here.
//
// A lag polynomial is a pair (lags, coefficients) without its leading 1; `coefficients` are those of
// x_t - sum c_i x_{t-lag_i} for the autoregressive side and of x_t + sum c_j x_{t-lag_j} for the moving-average side.
// Values before the start are zero throughout. Shapes with one to three lags have loops of their own, those up to six
// lags one loop together: measured, the general loop over lags costs three times as much a step.

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
  // Up to six lags, absent ones with a coefficient of 0 at the longest lag; what is beyond is taken off after.
  const longest = lags[count - 1], l3 = lags[3], c3 = c[3];
  const l4 = count > 4 ? lags[4] : longest, c4 = count > 4 ? c[4] : 0, l5 = count > 5 ? lags[5] : longest, c5 = count > 5 ? c[5] : 0;
  for (let t = head; t < n; t++) {
    out[t] = (x[t] - c0 * x[t - l0] - c1 * x[t - l1] - c2 * x[t - l2]) - (c3 * x[t - l3] + c4 * x[t - l4] + c5 * x[t - l5]);
  }
  for (let i = 6; i < count; i += 4) {
    const lag = (j: number) => j < count ? lags[j] : longest, weight = (j: number) => j < count ? c[j] : 0;
    const k0 = lag(i), k1 = lag(i + 1), k2 = lag(i + 2), k3 = lag(i + 3), w0 = weight(i), w1 = weight(i + 1), w2 = weight(i + 2), w3 = weight(i + 3);
    for (let t = head; t < n; t++) out[t] -= (w0 * x[t - k0] + w1 * x[t - k1]) + (w2 * x[t - k2] + w3 * x[t - k3]);
  }
}

/** Solves x_t + sum c_j x_{t-lag_j} = (x_t as given) forwards, in place: division by 1 + sum c_j B^lag_j.
 *  A lag of 1 is carried in a register: through memory it would cost half as much again a step.
 *  @param from  what stands before is divided already */
export function divideInto(x: Float64Array, n: number, lags: Lags, c: Float64Array, from = 0): void {
  const count = lags.length;
  if (count === 0) return;
  const longest = lags[count - 1], head = Math.min(n, Math.max(from, longest));
  for (let t = from; t < head; t++) {
    let sum = x[t];
    for (let j = 0; j < count && lags[j] <= t; j++) sum -= c[j] * x[t - lags[j]];
    x[t] = sum;
  }
  const one = lags[0] === 1 ? 1 : 0, c0 = one ? c[0] : 0, others = count - one;
  if (!one && count === 1) { const lag = lags[0], c1 = c[0]; for (let t = head; t < n; t++) x[t] -= c1 * x[t - lag]; return; }
  let last = head > 0 ? x[head - 1] : 0;
  if (others === 0) { for (let t = head; t < n; t++) { last = x[t] - c0 * last; x[t] = last; } return; }
  const lag = (j: number) => j < others ? lags[one + j] : longest, weight = (j: number) => j < others ? c[one + j] : 0;
  const l1 = lag(0), c1 = weight(0), l2 = lag(1), c2 = weight(1);
  if (others === 1) { for (let t = head; t < n; t++) { last = (x[t] - c1 * x[t - l1]) - c0 * last; x[t] = last; } return; }
  if (others === 2) { for (let t = head; t < n; t++) { last = (x[t] - c2 * x[t - l2] - c1 * x[t - l1]) - c0 * last; x[t] = last; } return; }
  const l3 = lag(2), c3 = weight(2), l4 = lag(3), c4 = weight(3), l5 = lag(4), c5 = weight(4);
  for (let t = head; t < n; t++) {
    let sum = (x[t] - c5 * x[t - l5] - c4 * x[t - l4]) - (c3 * x[t - l3] + c2 * x[t - l2]);
    for (let j = one + 5; j < count; j++) sum -= c[j] * x[t - lags[j]];
    last = (sum - c1 * x[t - l1]) - c0 * last;
    x[t] = last;
  }
}

/** The transposed division: solves x_t + sum c_j x_{t+lag_j} = (x_t as given) backwards from the end, in place. */
export function divideBackInto(x: Float64Array, n: number, lags: Lags, c: Float64Array): void {
  const count = lags.length;
  if (count === 0) return;
  const longest = lags[count - 1], body = Math.max(0, n - longest);
  for (let t = n - 1; t >= body; t--) {
    let sum = x[t];
    for (let j = 0; j < count && t + lags[j] < n; j++) sum -= c[j] * x[t + lags[j]];
    x[t] = sum;
  }
  const one = lags[0] === 1 ? 1 : 0, c0 = one ? c[0] : 0, others = count - one;
  if (!one && count === 1) { const lag = lags[0], c1 = c[0]; for (let t = body - 1; t >= 0; t--) x[t] -= c1 * x[t + lag]; return; }
  let last = body < n ? x[body] : 0;
  if (others === 0) { for (let t = body - 1; t >= 0; t--) { last = x[t] - c0 * last; x[t] = last; } return; }
  const lag = (j: number) => j < others ? lags[one + j] : longest, weight = (j: number) => j < others ? c[one + j] : 0;
  const l1 = lag(0), c1 = weight(0), l2 = lag(1), c2 = weight(1);
  if (others === 1) { for (let t = body - 1; t >= 0; t--) { last = (x[t] - c1 * x[t + l1]) - c0 * last; x[t] = last; } return; }
  if (others === 2) { for (let t = body - 1; t >= 0; t--) { last = (x[t] - c2 * x[t + l2] - c1 * x[t + l1]) - c0 * last; x[t] = last; } return; }
  const l3 = lag(2), c3 = weight(2), l4 = lag(3), c4 = weight(3), l5 = lag(4), c5 = weight(4);
  for (let t = body - 1; t >= 0; t--) {
    let sum = (x[t] - c5 * x[t + l5] - c4 * x[t + l4]) - (c3 * x[t + l3] + c2 * x[t + l2]);
    for (let j = one + 5; j < count; j++) sum -= c[j] * x[t + lags[j]];
    last = (sum - c1 * x[t + l1]) - c0 * last;
    x[t] = last;
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

/** sum over t of a_t b_{t-lag}, t in from..n-1, from lag on when left out. */
export function lagDot(a: Float64Array, b: Float64Array, n: number, lag: number, from = lag): number {
  let s0 = 0, s1 = 0, s2 = 0, s3 = 0, t = from;
  for (; t + 3 < n; t += 4) {
    s0 += a[t] * b[t - lag]; s1 += a[t + 1] * b[t + 1 - lag]; s2 += a[t + 2] * b[t + 2 - lag]; s3 += a[t + 3] * b[t + 3 - lag];
  }
  for (; t < n; t++) s0 += a[t] * b[t - lag];
  return (s0 + s1) + (s2 + s3);
}

/** Both sides of a small model in one sweep: z_t = x_t - a1 x_{t-1} - a2 x_{t-2} - b1 z_{t-1} - b2 z_{t-2}. The recursion's
 *  latency hides the autoregressive half, and the sum of z from `from` on, which is returned. */
export function smallForwardInto(z: Float64Array, x: Float64Array, n: number, a1: number, a2: number, b1: number, b2: number, from: number): number {
  let x1 = 0, x2 = 0, z1 = 0, z2 = 0, sum = 0, t = 0;
  for (; t < from; t++) {
    const now = x[t];
    const value = (now - a1 * x1 - a2 * x2 - b2 * z2) - b1 * z1;
    z[t] = value;
    x2 = x1; x1 = now; z2 = z1; z1 = value;
  }
  for (; t < n; t++) {
    const now = x[t];
    const value = (now - a1 * x1 - a2 * x2 - b2 * z2) - b1 * z1;
    z[t] = value;
    sum += value;
    x2 = x1; x1 = now; z2 = z1; z1 = value;
  }
  return sum;
}

/** The transposed division by 1 + b1 B + b2 B^2 of e into `lambda`, and on the way the sums that the gradient needs, with
 *  r = x - c: out = sums of lambda_t r_{t-1}, lambda_t r_{t-2}, lambda_t e_{t-1}, lambda_t e_{t-2}. */
export function smallBackwardInto(lambda: Float64Array, e: Float64Array, x: Float64Array, c: number, n: number, b1: number, b2: number, out: Float64Array): void {
  let l1 = 0, l2 = 0, s1 = 0, s2 = 0, u1 = 0, u2 = 0;
  let t = n - 1, e0 = e[t], e1 = t > 0 ? e[t - 1] : 0, r1 = t > 0 ? x[t - 1] - c : 0;
  for (; t >= 2; t--) {
    const value = (e0 - b2 * l2) - b1 * l1, e2 = e[t - 2], r2 = x[t - 2] - c;
    lambda[t] = value;
    s1 += value * r1; s2 += value * r2; u1 += value * e1; u2 += value * e2;
    l2 = l1; l1 = value; e0 = e1; e1 = e2; r1 = r2;
  }
  for (; t >= 0; t--) {
    const value = (e[t] - b2 * l2) - b1 * l1;
    lambda[t] = value;
    if (t === 1) { s1 += value * (x[0] - c); u1 += value * e[0]; }
    l2 = l1; l1 = value;
  }
  out[0] = s1; out[1] = s2; out[2] = u1; out[3] = u2;
}

/** out_t -= c x_{t-lag}, t in lag..n-1. */
export function subtractLagged(out: Float64Array, x: Float64Array, c: number, lag: number, n: number): void {
  for (let t = lag; t < n; t++) out[t] -= c * x[t - lag];
}

/** out = x - c y. */
export function subtractColumn(out: Float64Array, x: Float64Array, y: Float64Array, c: number, n: number): void {
  for (let t = 0; t < n; t++) out[t] = x[t] - c * y[t];
}

/** out = x - c from `from` on; returns the sum of its squares. */
export function subtractNumber(out: Float64Array, x: Float64Array, c: number, from: number, n: number): number {
  let s0 = 0, s1 = 0, t = from;
  for (; t + 1 < n; t += 2) {
    const v = x[t] - c, w = x[t + 1] - c;
    out[t] = v; out[t + 1] = w;
    s0 += v * v; s1 += w * w;
  }
  for (; t < n; t++) { const v = x[t] - c; out[t] = v; s0 += v * v; }
  return s0 + s1;
}

/** Sum of a_t, t in from..to-1. */
export function total(a: Float64Array, from: number, to: number): number {
  let s0 = 0, s1 = 0, s2 = 0, s3 = 0, t = from;
  for (; t + 3 < to; t += 4) { s0 += a[t]; s1 += a[t + 1]; s2 += a[t + 2]; s3 += a[t + 3]; }
  for (; t < to; t++) s0 += a[t];
  return (s0 + s1) + (s2 + s3);
}
