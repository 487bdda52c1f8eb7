// The door to the fast Fourier transform, and the three transforms that the rest of the library asks for.

import Transform from "fft.js";

/** Discrete Fourier transform of real numbers, for any length.
 *  @param x  length n >= 1, complete
 *  @returns  `{re, im}`, length n each, of sum over t of x[t] exp(-2 pi i j t / n)
 *  Cost O(n log n): powers of two directly, other lengths as a convolution with a chirp (Bluestein 1970). */
export function fourier(x: Float64Array): { readonly re: Float64Array; readonly im: Float64Array } {
  const n = x.length;
  const re = new Float64Array(n), im = new Float64Array(n);
  if (n === 1) { re[0] = x[0]; return { re, im }; }
  const direct = (n & (n - 1)) === 0;
  const out = direct ? powerOfTwo(x) : chirp(x);
  for (let j = 0; j < n; j++) { re[j] = out[2 * j]; im[j] = out[2 * j + 1]; }
  return { re, im };
}

/** Sums of lagged products: sum over t of x[t] y[t + k], k = 0..maxLag, by one transform of the zero-padded numbers each.
 *  Rounding errors are those of the transform, about 1e-16 of the largest sum times log n. */
export function laggedProducts(x: Float64Array, y: Float64Array, maxLag: number): Float64Array {
  const n = Math.max(x.length, y.length);
  const size = nextPowerOfTwo(n + maxLag + 1);
  const transform = new Transform(size);
  // Both real sequences travel in one complex transform: x as the real part, y as the imaginary part.
  const packed = new Float64Array(2 * size);
  for (let t = 0; t < x.length; t++) packed[2 * t] = x[t];
  for (let t = 0; t < y.length; t++) packed[2 * t + 1] = y[t];
  const spectrum = new Float64Array(2 * size);
  transform.transform(spectrum, packed);
  const product = packed;
  for (let j = 0; j < size; j++) {
    const m = j === 0 ? 0 : size - j;
    const a = spectrum[2 * j], b = spectrum[2 * j + 1], c = spectrum[2 * m], d = spectrum[2 * m + 1];
    const xr = (a + c) / 2, xi = (b - d) / 2, yr = (b + d) / 2, yi = (c - a) / 2;
    product[2 * j] = xr * yr + xi * yi;
    product[2 * j + 1] = xr * yi - xi * yr;
  }
  transform.inverseTransform(spectrum, product);
  const sums = new Float64Array(maxLag + 1);
  for (let k = 0; k <= maxLag; k++) sums[k] = spectrum[2 * k];
  return sums;
}

function nextPowerOfTwo(n: number): number {
  let size = 2;
  while (size < n) size *= 2;
  return size;
}

function powerOfTwo(x: Float64Array): Float64Array {
  const out = new Float64Array(2 * x.length), data = new Float64Array(2 * x.length);
  for (let t = 0; t < x.length; t++) data[2 * t] = x[t];
  new Transform(x.length).transform(out, data);
  return out;
}

/** Bluestein: jt = (j^2 + t^2 - (j - t)^2) / 2 turns the sum into a convolution of power-of-two length. */
function chirp(x: Float64Array): Float64Array {
  const n = x.length, size = nextPowerOfTwo(2 * n - 1);
  const cos = new Float64Array(n), sin = new Float64Array(n);
  for (let t = 0; t < n; t++) {
    // t^2 is reduced modulo 2n before the angle is formed, so that long series keep their digits.
    const angle = (Math.PI * ((t * t) % (2 * n))) / n;
    cos[t] = Math.cos(angle);
    sin[t] = Math.sin(angle);
  }
  const transform = new Transform(size);
  const a = new Float64Array(2 * size), b = new Float64Array(2 * size);
  for (let t = 0; t < n; t++) {
    a[2 * t] = x[t] * cos[t];
    a[2 * t + 1] = -x[t] * sin[t];
    b[2 * t] = cos[t];
    b[2 * t + 1] = sin[t];
    if (t > 0) { b[2 * (size - t)] = cos[t]; b[2 * (size - t) + 1] = sin[t]; }
  }
  const fa = new Float64Array(2 * size), fb = new Float64Array(2 * size);
  transform.transform(fa, a);
  transform.transform(fb, b);
  for (let j = 0; j < size; j++) {
    const re = fa[2 * j] * fb[2 * j] - fa[2 * j + 1] * fb[2 * j + 1];
    a[2 * j + 1] = fa[2 * j] * fb[2 * j + 1] + fa[2 * j + 1] * fb[2 * j];
    a[2 * j] = re;
  }
  transform.inverseTransform(fa, a);
  const out = new Float64Array(2 * n);
  for (let j = 0; j < n; j++) {
    out[2 * j] = fa[2 * j] * cos[j] + fa[2 * j + 1] * sin[j];
    out[2 * j + 1] = fa[2 * j + 1] * cos[j] - fa[2 * j] * sin[j];
  }
  return out;
}
