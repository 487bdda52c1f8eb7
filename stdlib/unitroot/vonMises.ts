// The generalised von Mises distribution: squared Brownian bridges integrated, the limit of KPSS-like statistics.

import { chiSquareQuantile } from "../distributions/chiSquare.ts";

/** P(V > x), V the sum of `df` independent integrals of a squared Brownian bridge (KPSS around a constant has df 1).
 *  By inverting the characteristic function (z / sin z)^(df/2), z = sqrt(2iu) (Gil-Pelaez 1951), about 1e-8 absolute;
 *  smaller probabilities are given as 1e-8.
 *  @param df  whole number >= 1
 *  @example vonMisesUpper(0.46136, 1) // 0.0500 (MacNeill 1978; Kwiatkowski et al. 1992 print 0.463) */
export function vonMisesUpper(x: number, df: number): number {
  if (!(x > 0)) return Number.isNaN(x) ? NaN : 1;
  // With u = v^2 the integrand is |phi| sin(arg phi - v^2 x) / v; |phi| falls like exp(-v df / 2).
  const end = 44 / df + 12 / Math.sqrt(df), step = Math.min(0.01, 0.2 / (1 + 2 * end * x));
  const points = 2 * Math.ceil(end / (2 * step)), h = end / points;
  let sum = 0;
  for (let i = 1; i <= points; i++) sum += (i === points ? 1 : i % 2 === 1 ? 4 : 2) * integrand(i * h, x, df); // it is 0 at v = 0
  const p = 0.5 + ((2 / Math.PI) * sum * h) / 3;
  return Math.min(1, Math.max(1e-8, p));
}

/** The x that V passes with probability p: Newton steps on log p, which is nearly straight in x, from a gamma
 *  distribution of the same mean df/6 and variance df/45.
 *  @param p  0.001 to 0.5   @example vonMisesQuantile(0.05, 3) // 1.0002 (Canova & Hansen 1995 print 1.01) */
export function vonMisesQuantile(p: number, df: number): number {
  let x = chiSquareQuantile(1 - p, 2.5 * df) / 15;
  for (let i = 0; i < 20; i++) {
    const h = 1e-4 * x, at = Math.log(vonMisesUpper(x, df)), slope = (Math.log(vonMisesUpper(x + h, df)) - at) / h, step = (at - Math.log(p)) / slope;
    x -= Math.max(-0.5 * x, Math.min(0.5 * x, step));
    if (Math.abs(step) < 1e-6 * x) break;
  }
  return x;
}

/** |phi(v^2)| sin(arg phi(v^2) - v^2 x) / v. With z = v(1 + i), sin z = (i/2) e^(v - iv) (1 - e^(-2v + 2iv)): the angle is
 *  then continuous in v, and nothing overflows. */
function integrand(v: number, x: number, df: number): number {
  const shrink = Math.exp(-2 * v), re = 1 - shrink * Math.cos(2 * v), im = -shrink * Math.sin(2 * v);
  const size = Math.log(Math.SQRT2 * v) - v + Math.LN2 - 0.5 * Math.log(re * re + im * im);
  const angle = v - Math.PI / 4 - Math.atan2(im, re);
  return (Math.exp((df / 2) * size) * Math.sin((df / 2) * angle - v * v * x)) / v;
}
