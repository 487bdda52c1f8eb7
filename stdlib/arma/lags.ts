// Reading of lag options and held coefficients.

import type { Held, Lags } from "./model.ts";

/** Distinct lags, ascending. A number means all lags up to it.
 *  @throws RangeError naming the option */
export function readLags(lags: Lags | undefined, what: string): number[] {
  if (lags === undefined || lags === null) return [];
  const list = typeof lags === "number" ? Array.from({ length: checked(lags, what, 0) }, (_, i) => i + 1) : lags;
  if (!Array.isArray(list)) throw new RangeError(`fit: ${what} takes a whole number of lags or a list of lags, as in ${what}: 2 or ${what}: [1, 12]`);
  for (const lag of list) checked(lag, what, 1);
  return [...new Set(list)].sort((a, b) => a - b);
}

function checked(v: unknown, what: string, least: number): number {
  if (typeof v !== "number" || !Number.isInteger(v) || v < least) {
    throw new RangeError(`fit: ${what} holds ${String(v)}; lags are whole numbers from ${least === 0 ? "0 (none)" : "1"} on`);
  }
  if (v > 5000) throw new RangeError(`fit: ${what} holds ${v}; lags above 5,000 are not estimated`);
  return v;
}

/** Held values by lag of the model; NaN where free.
 *  @param held  dense by lag: index 0 is lag 1 */
export function readHeld(held: readonly Held[] | undefined, lags: readonly number[], what: string): Float64Array {
  const out = new Float64Array(lags.length).fill(NaN);
  (held ?? []).forEach((v, i) => {
    const value = heldValue(v, `${what}[${i}]`);
    if (Number.isNaN(value)) return;
    const at = lags.indexOf(i + 1);
    if (at >= 0) out[at] = value;
    else if (value !== 0) throw new RangeError(`fit: hold.${what} gives ${value} for lag ${i + 1}, and the model has no such lag${lags.length > 0 ? ` (it has ${lags.join(", ")})` : ""}. Add the lag to the model, or leave the value out`);
  });
  return out;
}

/** NaN for "free". */
export function heldValue(v: Held | undefined | null, what: string): number {
  if (v === undefined || v === null || v === "free") return NaN;
  if (typeof v !== "number" || !Number.isFinite(v)) throw new RangeError(`fit: hold.${what} is ${String(v)}; give a number, or free`);
  return v;
}
