// The standard normal distribution: density, both tails, quantiles.

import { erfc } from "./special.ts";

/** Density of the standard normal distribution at z. */
export function normalDensity(z: number): number {
  return Math.exp(-0.5 * z * z) / Math.sqrt(2 * Math.PI);
}

/** P(Z <= z). @example normalCdf(-1.96) // 0.0249979 */
export function normalCdf(z: number): number {
  return 0.5 * erfc(-z * Math.SQRT1_2);
}

/** P(Z > z), computed from that tail, so that z = 30 still has its digits. */
export function normalUpper(z: number): number {
  return 0.5 * erfc(z * Math.SQRT1_2);
}

// Rational approximations of algorithm AS 241, PPND16 (Wichura 1988, Applied Statistics 37, p. 477):
// numerator and denominator, constant term first. Near the centre, in the tail, in the far tail.
const centreA = [3.3871328727963666080, 1.3314166789178437745e2, 1.9715909503065514427e3, 1.3731693765509461125e4,
  4.5921953931549871457e4, 6.7265770927008700853e4, 3.3430575583588128105e4, 2.5090809287301226727e3];
const centreB = [1, 4.2313330701600911252e1, 6.8718700749205790830e2, 5.3941960214247511077e3,
  2.1213794301586595867e4, 3.9307895800092710610e4, 2.8729085735721942674e4, 5.2264952788528545610e3];
const tailC = [1.42343711074968357734, 4.63033784615654529590, 5.76949722146069140550, 3.64784832476320460504,
  1.27045825245236838258, 2.41780725177450611770e-1, 2.27238449892691845833e-2, 7.74545014278341407640e-4];
const tailD = [1, 2.05319162663775882187, 1.67638483018380384940, 6.89767334985100004550e-1,
  1.48103976427480074590e-1, 1.51986665636164571966e-2, 5.47593808499534494600e-4, 1.05075007164441684324e-9];
const farE = [6.65790464350110377720, 5.46378491116411436990, 1.78482653991729133580, 2.96560571828504891230e-1,
  2.65321895265761230930e-2, 1.24266094738807843860e-3, 2.71155556874348757815e-5, 2.01033439929228813265e-7];
const farF = [1, 5.99832206555887937690e-1, 1.36929880922735805310e-1, 1.48753612908506148525e-2,
  7.86869131145613259100e-4, 1.84631831751005468180e-5, 1.42151175831644588870e-7, 2.04426310338993978564e-15];

/** Standard normal quantile: the z with P(Z <= z) = p.
 *  @param p  in [0, 1]; 0 and 1 give -Infinity and Infinity
 *  About 16 digits, also at p = 1e-300. Source: Wichura (1988), AS 241.
 *  @example normalQuantile(0.975) // 1.959963984540054 */
export function normalQuantile(p: number): number {
  if (!(p >= 0 && p <= 1)) return NaN;
  if (p === 0 || p === 1) return p === 0 ? -Infinity : Infinity;
  const q = p - 0.5;
  if (Math.abs(q) <= 0.425) {
    const r = 0.180625 - q * q;
    return q * polynomial(centreA, r) / polynomial(centreB, r);
  }
  const r = Math.sqrt(-Math.log(q < 0 ? p : 1 - p));
  const z = r <= 5
    ? polynomial(tailC, r - 1.6) / polynomial(tailD, r - 1.6)
    : polynomial(farE, r - 5) / polynomial(farF, r - 5);
  return q < 0 ? -z : z;
}

function polynomial(coefficients: readonly number[], x: number): number {
  let sum = 0;
  for (let i = coefficients.length - 1; i >= 0; i--) sum = sum * x + coefficients[i];
  return sum;
}
