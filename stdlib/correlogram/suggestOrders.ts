// The rule of thumb that reads orders off a correlogram, said as a suggestion with its reason.

/** Orders to begin with, ready for a fit; which cut-off they came from; and why, in words. */
export interface Suggestion {
  readonly ar: number;
  readonly ma: number;
  /** Seasonal orders, where the seasonal lags stand out. */
  readonly season: { readonly length: number; readonly ar: number; readonly ma: number } | null;
  /** Last lag before the correlations stay inside the band; null where they do not cut off. */
  readonly cutOff: { readonly acf: number | null; readonly pacf: number | null };
  readonly reason: string;
}

interface Signs {
  readonly acf: Float64Array; readonly pacf: Float64Array;
  /** Half-widths by lag. */
  readonly acfBand: Float64Array; readonly pacfBand: Float64Array;
  readonly level: number;
  readonly seasonLength: number | null;
}

/** Reads the cut-offs: partial autocorrelations that stop at lag p suggest AR(p), autocorrelations that stop at q suggest MA(q),
 *  neither a mixed model. About (1 - level) of the lags fall outside by chance: that many stragglers do not undo a cut-off.
 *  Source of the rule: Box & Jenkins (1976), section 6.2. */
export function suggestOrders(signs: Signs): Suggestion {
  const { acf, pacf, acfBand, pacfBand, level, seasonLength } = signs;
  // Within the first season only: what stands out at seasonal lags is read apart.
  const near = Math.min(acf.length - 1, seasonLength !== null && seasonLength > 3 ? seasonLength - 2 : 12);
  const acfCut = cutOff(acf, acfBand, near, level), pacfCut = cutOff(pacf, pacfBand, near, level);
  const season = seasonLength === null ? null : seasonalOrders(signs, seasonLength);
  // Where both stop at the same lag, the one that leaves less behind it has stopped, the other only fallen.
  const tie = acfCut !== null && acfCut === pacfCut && left(pacf, acfCut, near) > left(acf, acfCut, near);
  const { ar, ma, reason } = orders(acfCut, pacfCut, tie, season !== null);
  return { ar, ma, season, cutOff: { acf: acfCut, pacf: pacfCut }, reason: season === null ? reason : `${reason}; ${seasonalReason(season)}` };
}

/** The lag after which the near lags stay inside, but for as many as chance leaves outside more than one time in twenty,
 *  none of them far out or at the very next lag; null where that lag is more than a third of them. */
function cutOff(r: Float64Array, band: Float64Array, near: number, level: number): number | null {
  const outside = (k: number): boolean => Math.abs(r[k]) > band[k];
  const most = Math.max(2, Math.floor(near / 3));
  for (let cut = 0; cut <= most; cut++) {
    let stragglers = 0, large = false;
    for (let k = cut + 1; k <= near; k++) if (outside(k)) { stragglers++; large ||= k === cut + 1 || Math.abs(r[k]) > 1.5 * band[k]; }
    if (!large && stragglers <= byChance(near - cut, 1 - level)) return cut;
  }
  return null;
}

/** The largest count of `n` lags that chance puts outside with a probability above 0.05, each at `share`. */
export function byChance(n: number, share: number): number {
  let term = (1 - share) ** n, upper = 1, count = 0;
  while (count < n) {
    upper -= term; // P(more than `count`)
    if (upper <= 0.05) return count;
    term *= ((n - count) / (count + 1)) * (share / (1 - share));
    count++;
  }
  return n;
}

function left(r: Float64Array, cut: number, near: number): number {
  let sum = 0;
  for (let k = cut + 1; k <= near; k++) sum += r[k] * r[k];
  return sum;
}

function orders(acfCut: number | null, pacfCut: number | null, acfStopped: boolean, seasonal: boolean): { ar: number; ma: number; reason: string } {
  const lags = (n: number): string => (n === 1 ? "lag 1" : `lag ${n}`);
  if (acfCut === 0 && pacfCut === 0) {
    return { ar: 0, ma: 0, reason: seasonal ? "no low lag stands out" : "no more lags fall outside the band than chance would put there, so there is nothing for AR or MA terms to explain" };
  }
  if (pacfCut !== null && pacfCut > 0 && (acfCut === null || pacfCut < acfCut || (pacfCut === acfCut && !acfStopped))) {
    return { ar: pacfCut, ma: 0, reason: `the partial autocorrelations stay inside the band after ${lags(pacfCut)}${acfCut === null ? " while the autocorrelations die out slowly" : ""}: an AR(${pacfCut}) is a place to begin` };
  }
  if (acfCut !== null && acfCut > 0) {
    return { ar: 0, ma: acfCut, reason: `the autocorrelations stay inside the band after ${lags(acfCut)}${pacfCut === null ? " while the partial autocorrelations die out slowly" : ""}: an MA(${acfCut}) is a place to begin` };
  }
  return { ar: 1, ma: 1, reason: "neither the autocorrelations nor the partial autocorrelations stop at a low lag: a mixed ARMA(1,1) is a place to begin, then compare its neighbours" };
}

function seasonalOrders({ acf, pacf, acfBand, pacfBand }: Signs, length: number): { length: number; ar: number; ma: number } | null {
  const multiples: number[] = [];
  for (let k = length; k < acf.length && multiples.length < 3; k += length) multiples.push(k);
  if (multiples.length < 2) return null;
  const a = multiples.map((k) => Math.abs(acf[k]) > acfBand[k]), p = multiples.map((k) => Math.abs(pacf[k]) > pacfBand[k]);
  if (!a[0]) return null;
  // Autocorrelations that stop after one season point to a seasonal MA, that go on to a seasonal AR.
  if (!a.slice(1).some(Boolean)) return { length, ar: 0, ma: 1 };
  return p.slice(1).some(Boolean) ? { length, ar: 1, ma: 1 } : { length, ar: 1, ma: 0 };
}

function seasonalReason(season: { length: number; ar: number; ma: number }): string {
  const { length, ar, ma } = season;
  if (ar === 0) return `lag ${length} stands out and ${2 * length} does not: one seasonal MA term is a place to begin`;
  if (ma === 0) return `lags ${length} and ${2 * length} stand out while the partial autocorrelations stop: one seasonal AR term is a place to begin`;
  return `lags ${length} and ${2 * length} stand out in both: try seasonal terms, or a seasonal difference if the autocorrelations there die out slowly`;
}
