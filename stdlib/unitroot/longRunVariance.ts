// The long-run variance: what the variance of a mean comes to when neighbours are correlated.

/** A bandwidth: a number of lags, or a rule for it. */
export type Bandwidth = number | "short" | "long" | "automatic";

/** Newey-West estimate with Bartlett weights, gamma_0 + 2 sum of (1 - j/(q + 1)) gamma_j, each gamma divided by n.
 *  @param u          residuals, not centred again   @param bandwidth  q >= 0
 *  Source: Newey & West (1987). */
export function longRunVariance(u: Float64Array, bandwidth: number): number {
  let sum = lagged(u, 0);
  for (let j = 1; j <= bandwidth; j++) sum += 2 * (1 - j / (bandwidth + 1)) * lagged(u, j);
  return sum;
}

/** The bandwidth that was asked for, and its rule in words.
 *  "short": floor(4 (n/100)^(1/4)); "long": floor(12 (n/100)^(1/4)) (Schwert 1989); "automatic": Newey & West (1994), as
 *  used by Hobijn, Franses & Ooms (2004).   @throws RangeError for anything else */
export function bandwidthOf(who: string, asked: Bandwidth, u: Float64Array): { readonly lags: number; readonly rule: string } {
  const n = u.length;
  if (typeof asked === "number") {
    if (!Number.isInteger(asked) || asked < 0 || asked >= n) throw new RangeError(`${who}: bandwidth is ${asked}, expected a whole number from 0 to ${n - 1}, "short", "long" or "automatic"`);
    return { lags: asked, rule: "as given" };
  }
  if (asked === "short" || asked === "long") {
    const c = asked === "short" ? 4 : 12;
    return { lags: Math.min(n - 1, Math.floor(c * (n / 100) ** 0.25)), rule: lagRuleOf(asked) };
  }
  if (asked === "automatic") {
    const first = Math.min(n - 1, Math.floor(n ** (2 / 9)));
    let s0 = lagged(u, 0), s1 = 0;
    for (let j = 1; j <= first; j++) { const g = lagged(u, j); s0 += 2 * g; s1 += 2 * j * g; }
    const q = Math.floor(1.1447 * ((s1 / s0) ** 2) ** (1 / 3) * n ** (1 / 3));
    return { lags: Math.min(n - 1, q), rule: "chosen from the data (Newey and West 1994)" };
  }
  throw new RangeError(`${who}: bandwidth is "${String(asked)}", expected a whole number, "short", "long" or "automatic"`);
}

/** The rules of Schwert (1989) in words. */
export function lagRuleOf(rule: "short" | "long"): string {
  return `by the ${rule} rule, ${rule === "short" ? 4 : 12} (n/100)^¼ rounded down`;
}

function lagged(u: Float64Array, j: number): number {
  let sum = 0;
  for (let t = j; t < u.length; t++) sum += u[t] * u[t - j];
  return sum / u.length;
}
