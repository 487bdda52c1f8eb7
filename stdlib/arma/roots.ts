// Roots of lag polynomials, all at once.

import type { Root } from "./model.ts";

/** Roots in B of 1 + c_1 B + ... + c_d B^d, by increasing modulus.
 *  Aberth's simultaneous iteration on the reversed polynomial (roots 1/B lie in a bounded disc for stable models), started on
 *  circles given by the coefficients' sizes. Sources: Aberth (1973); starting circles after Bini (1996), simplified.
 *  @param c  coefficients of B^1.., highest ones may be zero
 *  @example roots([-0.5]) // [{ re: 2, im: 0, modulus: 2 }] */
export function roots(c: ArrayLike<number>): Root[] {
  const { re, im } = inverseRoots(c);
  return Array.from(re, (x, i) => {
    const y = im[i], size = x * x + y * y;
    return { re: x / size, im: y === 0 ? 0 : -y / size, modulus: 1 / Math.hypot(x, y) };
  }).sort((a, b) => a.modulus - b.modulus || b.im - a.im);
}

/** The zeros z of z^d + c_1 z^(d-1) + ... + c_d, d the last lag with a coefficient that is not 0. */
export function inverseRoots(c: ArrayLike<number>): { re: Float64Array; im: Float64Array } {
  let d = c.length;
  while (d > 0 && c[d - 1] === 0) d--;
  const gap = commonStep(c, d);
  if (gap > 1) return expandRoots(inverseRoots(Array.from({ length: d / gap }, (_, i) => c[(i + 1) * gap - 1])), gap);
  const re = new Float64Array(d), im = new Float64Array(d);
  if (d === 1) { re[0] = -c[0]; return { re, im }; }
  if (d === 2) { quadratic(c[0], c[1], re, im); return { re, im }; }
  startInto(c, d, re, im);
  aberth(c, d, re, im);
  pairUp(re, im);
  return { re, im };
}

/** Largest step whose multiples hold all lags: a seasonal polynomial is a short one in B^s, solved as such to keep its digits. */
function commonStep(c: ArrayLike<number>, d: number): number {
  let step = 0;
  for (let i = 1; i <= d; i++) if (c[i - 1] !== 0) step = gcd(step, i);
  return step;
}

function gcd(a: number, b: number): number { return b === 0 ? a : gcd(b, a % b); }

function expandRoots(z: { re: Float64Array; im: Float64Array }, step: number): { re: Float64Array; im: Float64Array } {
  const n = z.re.length * step;
  const re = new Float64Array(n), im = new Float64Array(n);
  for (let i = 0; i < z.re.length; i++) {
    const r = Math.hypot(z.re[i], z.im[i]) ** (1 / step), angle = Math.atan2(z.im[i], z.re[i]);
    for (let k = 0; k < step; k++) {
      const a = (angle + 2 * Math.PI * k) / step;
      re[i * step + k] = r * Math.cos(a);
      const y = r * Math.sin(a);
      im[i * step + k] = Math.abs(y) < 4e-16 * r ? 0 : y;
    }
  }
  return { re, im };
}

function quadratic(b: number, c: number, re: Float64Array, im: Float64Array): void {
  const half = -b / 2, disc = half * half - c;
  if (disc < 0) {
    re[0] = re[1] = half;
    im[0] = Math.sqrt(-disc);
    im[1] = -im[0];
    return;
  }
  const large = half >= 0 ? half + Math.sqrt(disc) : half - Math.sqrt(disc);
  re[0] = large;
  re[1] = large === 0 ? 0 : c / large;
}

/** Points on circles whose radii follow the upper convex hull of log |coefficient| against degree. */
function startInto(c: ArrayLike<number>, d: number, re: Float64Array, im: Float64Array): void {
  const size = (i: number) => i === 0 ? 0 : c[i - 1] === 0 ? -Infinity : Math.log(Math.abs(c[i - 1]));
  const hull: number[] = [0];
  for (let i = 1; i <= d; i++) {
    if (size(i) === -Infinity) continue;
    while (hull.length > 1) {
      const a = hull[hull.length - 2], b = hull[hull.length - 1];
      if ((size(b) - size(a)) * (i - a) <= (size(i) - size(a)) * (b - a)) hull.pop(); else break;
    }
    hull.push(i);
  }
  let at = 0;
  for (let k = 1; k < hull.length; k++) {
    const from = hull[k - 1], to = hull[k], count = to - from;
    const radius = Math.exp((size(to) - size(from)) / count);
    for (let i = 0; i < count; i++, at++) {
      const angle = (2 * Math.PI * i) / count + (2 * Math.PI * k) / d + 0.7;
      re[at] = radius * Math.cos(angle);
      im[at] = radius * Math.sin(angle);
    }
  }
}

function aberth(c: ArrayLike<number>, d: number, re: Float64Array, im: Float64Array): void {
  // The moves shrink until they are rounding alone, which near a multiple root is far above the last digit: then they wander.
  let least = Infinity, idle = 0;
  for (let round = 0; round < 200 && !(idle > 3 && least < 1e-5); round++) {
    let moved = 0;
    for (let i = 0; i < d; i++) {
      const x = re[i], y = im[i];
      // Value and derivative by Horner; above the unit circle in the reversed variable would overflow only for absurd sizes.
      let pr = 1, pi = 0, dr = 0, di = 0;
      for (let k = 0; k < d; k++) {
        const t = dr * x - di * y + pr; di = dr * y + di * x + pi; dr = t;
        const s = pr * x - pi * y + c[k]; pi = pr * y + pi * x; pr = s;
      }
      const dn = dr * dr + di * di;
      if (pr === 0 && pi === 0) continue;
      if (dn === 0) { re[i] += 1e-8 * (1 + Math.abs(x)); moved = 1; continue; }
      const nr = (pr * dr + pi * di) / dn, ni = (pi * dr - pr * di) / dn;
      let sr = 0, si = 0;
      for (let j = 0; j < d; j++) {
        if (j === i) continue;
        const ur = x - re[j], ui = y - im[j], un = ur * ur + ui * ui;
        if (un > 0) { sr += ur / un; si -= ui / un; }
      }
      const br = 1 - (nr * sr - ni * si), bi = -(nr * si + ni * sr), bn = br * br + bi * bi;
      if (bn === 0) continue;
      const stepR = (nr * br + ni * bi) / bn, stepI = (ni * br - nr * bi) / bn;
      re[i] -= stepR; im[i] -= stepI;
      moved = Math.max(moved, Math.hypot(stepR, stepI) / (Math.hypot(x, y) || 1));
    }
    if (moved < 2e-16) return;
    if (moved < least / 2) { least = moved; idle = 0; } else idle++;
  }
}

/** Real coefficients have conjugate roots: makes pairs exact and near-real lone roots real. */
function pairUp(re: Float64Array, im: Float64Array): void {
  const free = new Set<number>(re.keys());
  for (const i of [...free].sort((a, b) => Math.abs(im[b]) - Math.abs(im[a]))) {
    if (!free.delete(i)) continue;
    const scale = Math.hypot(re[i], im[i]);
    let best = -1, gap = Infinity;
    for (const j of free) {
      const distance = Math.hypot(re[i] - re[j], im[i] + im[j]);
      if (distance < gap) { gap = distance; best = j; }
    }
    if (Math.abs(im[i]) <= 1e-13 * scale || best < 0 || (gap > Math.abs(im[i]) && Math.abs(im[i]) < 1e-6 * scale)) { im[i] = 0; continue; }
    if (gap > 1e-6 * scale && Math.abs(im[i]) > gap) continue;
    free.delete(best);
    const x = (re[i] + re[best]) / 2, y = (im[i] - im[best]) / 2;
    re[i] = re[best] = x;
    im[i] = y; im[best] = -y;
  }
}

/** Coefficients c_1.. of prod (1 - z_i B) for inverse roots z. */
function fromInverseRoots(re: ArrayLike<number>, im: ArrayLike<number>): Float64Array {
  const d = re.length;
  const cr = new Float64Array(d + 1), ci = new Float64Array(d + 1);
  cr[0] = 1;
  for (let i = 0; i < d; i++) {
    for (let k = i + 1; k >= 1; k--) {
      const x = cr[k] - (re[i] * cr[k - 1] - im[i] * ci[k - 1]);
      ci[k] -= re[i] * ci[k - 1] + im[i] * cr[k - 1];
      cr[k] = x;
    }
  }
  return cr.slice(1);
}

/** The polynomial 1 + c_1 B + ... with the same autocovariances (up to scale) and no root inside the unit circle. */
export function reflected(c: ArrayLike<number>): Float64Array {
  const { re, im } = inverseRoots(c);
  for (let i = 0; i < re.length; i++) {
    const size = re[i] ** 2 + im[i] ** 2;
    if (size > 1) { re[i] /= size; im[i] /= size; }
  }
  const out = new Float64Array(c.length);
  out.set(fromInverseRoots(re, im));
  return out;
}
