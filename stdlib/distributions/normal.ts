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
const centreA = [3.3871328727963665, 133.14166789178438, 1971.5909503065513, 13731.69376550946,
  45921.95393154987, 67265.7709270087, 33430.57558358813, 2509.0809287301227];
const centreB = [1, 42.31333070160091, 687.1870074920579, 5394.196021424751,
  21213.794301586597, 39307.89580009271, 28729.085735721943, 5226.495278852854];
const tailC = [1.4234371107496835, 4.630337846156546, 5.769497221460691, 3.6478483247632045,
  1.2704582524523684, 0.2417807251774506, 0.022723844989269184, 0.0007745450142783414];
const tailD = [1, 2.053191626637759, 1.6763848301838038, 0.6897673349851,
  0.14810397642748008, 0.015198666563616457, 0.0005475938084995345, 1.0507500716444169e-9];
const farE = [6.657904643501103, 5.463784911164114, 1.7848265399172913, 0.29656057182850487,
  0.026532189526576124, 0.0012426609473880784, 2.7115555687434876e-5, 2.0103343992922881e-7];
const farF = [1, 0.599832206555888, 0.1369298809227358, 0.014875361290850615,
  0.0007868691311456133, 1.8463183175100548e-5, 1.421511758316446e-7, 2.0442631033899397e-15];

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
