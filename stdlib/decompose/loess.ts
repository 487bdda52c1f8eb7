// Local regression at equally spaced points: the smoother inside STL.

/** Loess at every point 1..n of equally spaced values.
 *  @param window   nearest points that count, may exceed n   @param degree  0 or 1
 *  @param jump     evaluate every so many points, straight lines between
 *  @param weights  robustness weights, or null. Source: Cleveland et al. (1990), section 2. */
export function loess(y: Float64Array, window: number, degree: 0 | 1, jump: number, weights: Float64Array | null): Float64Array {
  const n = y.length;
  if (n < 2) return Float64Array.from(y);
  const out = new Float64Array(n), step = Math.min(jump, n - 1), half = Math.floor((window + 1) / 2);
  const put = (i: number, from: number, to: number): void => { out[i - 1] = loessAt(y, window, degree, i, from, to, weights) ?? y[i - 1]; };
  const span = (i: number): [number, number] => {
    if (window >= n) return [1, n];
    if (i < half) return [1, window];
    if (i >= n - half + 1) return [n - window + 1, n];
    return [i - half + 1, window + i - half];
  };
  let from = 1, to = Math.min(window, n);
  for (let i = 1; i <= n; i += step) {
    if (window >= n || step > 1) [from, to] = span(i);
    else if (i > half && to !== n) { from++; to++; }
    put(i, from, to);
  }
  if (step > 1) {
    for (let i = 1; i + step <= n; i += step) line(out, i, i + step);
    const last = Math.floor((n - 1) / step) * step + 1;
    if (last !== n) { put(n, from, to); if (last !== n - 1) line(out, last, n); }
  }
  return out;
}

/** Loess at one place xs (may be 0 or n + 1) from points from..to, counted from 1; null where all weights vanish. */
export function loessAt(y: Float64Array, window: number, degree: 0 | 1, xs: number, from: number, to: number, weights: Float64Array | null): number | null {
  const n = y.length;
  const h = Math.max(xs - from, to - xs) + (window > n ? Math.floor((window - n) / 2) : 0);
  const w = new Float64Array(to - from + 1);
  let sum = 0;
  for (let j = from; j <= to; j++) {
    const r = Math.abs(j - xs);
    if (r > 0.999 * h) continue;
    const u = r / h, fall = 1 - u * u * u; // products: a general power takes five times as long
    const tricube = r <= 0.001 * h ? 1 : fall * fall * fall;
    w[j - from] = weights === null ? tricube : tricube * weights[j - 1];
    sum += w[j - from];
  }
  if (sum <= 0) return null;
  let mean = 0, value = 0;
  for (let j = from; j <= to; j++) { w[j - from] /= sum; mean += w[j - from] * j; }
  if (h > 0 && degree > 0) {
    let spread = 0;
    for (let j = from; j <= to; j++) spread += w[j - from] * (j - mean) ** 2;
    if (Math.sqrt(spread) > 0.001 * (n - 1)) for (let j = from; j <= to; j++) w[j - from] *= ((xs - mean) / spread) * (j - mean) + 1;
  }
  for (let j = from; j <= to; j++) value += w[j - from] * y[j - 1];
  return value;
}

function line(out: Float64Array, from: number, to: number): void {
  const slope = (out[to - 1] - out[from - 1]) / (to - from);
  for (let j = from + 1; j < to; j++) out[j - 1] = out[from - 1] + slope * (j - from);
}
