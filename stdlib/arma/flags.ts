// What an analyst should know before leaning on a fit: each flag says what was found, by which rule, and what to do.

import type { Note } from "./model.ts";
import { denseFactor } from "./shape.ts";
import type { Prepared } from "./prepare.ts";
import { nearestRoot } from "./region.ts";
import { inverseRoots } from "./roots.ts";

/** Root modulus below which a root counts as close to the unit circle: a shock then still has a tenth of its effect after
 *  230 steps. Common practice: look at differencing from a root of about 1.01 to 1.05 on. */
const NEAR_UNIT = 1.01;
/** On the circle for all that the data can say; no standard errors there (Sargan & Bhargava 1983: estimates pile up at 1). */
export const BOUNDARY = 1 + 1e-4;
/** Inverse roots of the two sides closer than this nearly cancel. */
const CANCEL = 0.1;
/** Correlation of two estimates from which they can hardly be told apart. */
const CORRELATED = 0.95;
/** Observations a parameter: common advice is 10 or more. */
const PER_PARAMETER = 5;

export interface Findings {
  readonly prepared: Prepared;
  readonly x: Float64Array;
  readonly converged: boolean;
  readonly n: number;
  readonly k: number;
  /** Correlations of estimates, with their names; null when not available. */
  readonly correlation: Float64Array | null;
  readonly names: readonly string[];
  readonly aliased: readonly string[];
  readonly gaps: number;
  readonly sigma2: number;
  readonly variance: number;
}

export function flags(f: Findings): Note[] {
  const notes: Note[] = [];
  const caution = (code: string, text: string) => { notes.push({ code, tone: "caution", text }); };
  if (!f.converged) caution("notConverged", "The search for the maximum stopped before it had converged: the estimates may not be the best. Try fewer lags, or look for an outlier or a change of scale in the series.");
  rootFlags(f, caution);
  cancellation(f, caution);
  correlated(f, caution);
  if (f.k > 0 && f.n < PER_PARAMETER * f.k) caution("fewObservations", `There are ${f.n} observations for ${f.k} parameters, fewer than ${PER_PARAMETER} each: estimates and standard errors are rough, and criteria without the small-sample correction mislead. Take fewer lags, or use aicc.`);
  for (const name of f.aliased) caution("collinear", `${name === "mean" ? "The mean" : `The regressor ${name}`} is a linear combination of the other regressors${f.prepared.lost > 0 ? " after differencing" : ""}, so its coefficient cannot be told from theirs; it was left out (coefficient 0, no standard error). Remove it, or one of the others.`);
  if (f.sigma2 < 1e-10 * f.variance && Number.isNaN(f.prepared.heldSigma2)) caution("perfectFit", "The model follows the series almost exactly, so the likelihood has no proper maximum: the series looks deterministic. Look at how it was made before using its standard errors.");
  if (f.gaps > 0) notes.push({ code: "gaps", tone: "note", text: `${f.gaps} missing value${f.gaps === 1 ? "" : "s"} inside the sample: the likelihood is that of what was observed, nothing was filled in.` });
  return notes;
}

type Caution = (code: string, text: string) => void;

function rootFlags(f: Findings, caution: Caution): void {
  const [ar, sar, ma, sma] = f.prepared.shape.factors.map(part => nearestRoot(part, f.x));
  const season = f.prepared.seasonLength;
  if (ar < NEAR_UNIT) caution("nearUnitRoot", `An autoregressive root lies at ${digits(ar)}, close to the unit circle: the process hardly returns to a mean. Consider ${f.prepared.lost > 0 ? "another difference" : "differencing"}, and check with the stationarity tests.`);
  if (sar < NEAR_UNIT) caution("nearUnitRoot", `A seasonal autoregressive root lies at ${digits(sar)} (in seasons), close to the unit circle: the seasonal pattern is nearly permanent. Consider difference(${season}).`);
  const differenced = f.prepared.lost > 0;
  if (ma < BOUNDARY) caution("overDifferenced", `A moving-average root lies on the unit circle (modulus ${digits(ma)})${differenced ? ": the sign of a difference too many. Fit with one difference fewer, with a mean or a trend instead" : ": the model is not invertible there. The sign of a series that was differenced before it got here, or of a trend or season that should be a regressor"}.`);
  else if (ma < NEAR_UNIT) caution("nearNonInvertible", `A moving-average root lies at ${digits(ma)}, close to the unit circle${differenced ? ": perhaps a difference too many" : ""}. Its estimate is not normally distributed; prefer intervals from profile or simulation, and compare with one difference fewer.`);
  if (sma < BOUNDARY) caution("overDifferenced", `A seasonal moving-average root lies on the unit circle: the seasonal pattern is fixed. ${f.prepared.differences.includes(season) ? `Leave difference(${season}) out and use harmonics(${season}, …) or seasonal dummies as regressors` : "Use harmonics or seasonal dummies as regressors"}.`);
  else if (sma < NEAR_UNIT) caution("nearNonInvertible", `A seasonal moving-average root lies at ${digits(sma)} (in seasons), close to the unit circle: the seasonal pattern hardly changes. Compare with a fixed one (harmonics as regressors).`);
}

function digits(v: number): string { return v.toFixed(v < 1.001 ? 5 : 3); }

function cancellation(f: Findings, caution: Caution): void {
  const parts = f.prepared.shape.factors;
  for (const [i, j, word] of [[0, 2, ""], [1, 3, "seasonal "]] as const) {
    if (parts[i].lags.length === 0 || parts[j].lags.length === 0) continue;
    const a = inverseRoots(denseFactor(parts[i], f.x)), b = inverseRoots(denseFactor(parts[j], f.x));
    let least = Infinity, at = 0;
    for (let s = 0; s < a.re.length; s++) {
      for (let t = 0; t < b.re.length; t++) {
        const gap = Math.hypot(a.re[s] - b.re[t], a.im[s] - b.im[t]);
        if (gap < least) { least = gap; at = Math.hypot(a.re[s], a.im[s]); }
      }
    }
    if (least < CANCEL) caution("nearCancelling", `A ${word}autoregressive and a ${word}moving-average factor nearly cancel (inverse roots ${least.toFixed(3)} apart, near ${at.toFixed(2)}): the data cannot tell them from none. Drop one ${word}lag on each side.`);
  }
}

function correlated(f: Findings, caution: Caution): void {
  const m = f.names.length;
  if (f.correlation === null) return;
  let worst = 0, a = 0, b = 0;
  for (let i = 0; i < m; i++) for (let j = 0; j < i; j++) {
    const r = f.correlation[i * m + j];
    if (Math.abs(r) > Math.abs(worst)) { worst = r; a = j; b = i; }
  }
  if (Math.abs(worst) > CORRELATED) caution("correlated", `The estimates of ${f.names[a]} and ${f.names[b]} are correlated ${worst.toFixed(2)}: the data hardly tell one from the other, and each alone means little. Try the model without one of them.`);
}
