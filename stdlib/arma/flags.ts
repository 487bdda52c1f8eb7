// What an analyst should know before leaning on a fit: each flag says what was found, by which rule, and what to do.

import type { Note } from "./model.ts";
import { denseFactor } from "./shape.ts";
import { correlationAt, inflation } from "./covariance.ts";
import { differencedRegressor, type Prepared } from "./prepare.ts";
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
/** A regressor's variance inflation factor from which the others say nearly the same (common practice, Marquardt 1970). */
const INFLATED = 10;
/** What the mean is called among the columns. */
export const MEAN = "the mean";
/** Observations a parameter: common advice is 10 or more. */
const PER_PARAMETER = 5;

export interface Findings {
  readonly prepared: Prepared;
  readonly x: Float64Array;
  readonly converged: boolean;
  readonly n: number;
  readonly k: number;
  /** Names of the free lag coefficients, then of the estimated columns (mean and regressors). */
  readonly lags: readonly string[];
  readonly columns: readonly string[];
  /** Of the estimates in that order, in their own units; null when not available. */
  readonly covariance: Float64Array | null;
  readonly aliased: readonly string[];
  readonly gaps: number;
  readonly sigma2: number;
  readonly variance: number;
}

/** Cautions first, in the order in which an analyst would look at them; then what is only worth knowing. */
export function flags(f: Findings): Note[] {
  const notes: Note[] = [];
  const caution = (code: string, text: string) => { notes.push({ code, tone: "caution", text }); };
  if (!f.converged) caution("notConverged", towardsThePattern(f)
    ? "The search did not settle: the likelihood keeps rising, ever more slowly, towards a model whose two sides share a root on the unit circle. That is a fixed pattern (a level, a swing) and no process: take one lag fewer on each side, or put the pattern into regressors."
    : "The search for the maximum stopped before it had converged: the estimates may not be the best. Try fewer lags, or look for an outlier or a change of scale in the series.");
  rootFlags(f, caution);
  cancellation(f, caution);
  correlated(f, caution);
  if (f.k > 0 && f.n < PER_PARAMETER * f.k) caution("fewObservations", `There are ${f.n} observations for ${f.k} parameters, fewer than ${PER_PARAMETER} each: estimates and standard errors are rough, and criteria without the small-sample correction mislead. Take fewer lags, or use aicc.`);
  const gone = f.aliased.filter(name => name !== MEAN && columnOf(f, name).every(v => v === 0 || Number.isNaN(v)));
  if (gone.length > 0) caution("collinear", goneText(f, gone));
  for (const name of f.aliased) if (!gone.includes(name)) caution("collinear", aliasText(f, name));
  inflated(f, caution);
  if (f.sigma2 < 1e-10 * f.variance && Number.isNaN(f.prepared.heldSigma2)) caution("perfectFit", "The model follows the series almost exactly, so the likelihood has no proper maximum: the series looks deterministic. Look at how it was made before using its standard errors.");
  if (f.gaps > 0) notes.push({ code: "gaps", tone: "note", text: `${f.gaps} missing value${f.gaps === 1 ? "" : "s"} inside the sample: the likelihood is that of what was observed, nothing was filled in.` });
  return notes;
}

/** Whether an autoregressive and a moving-average root meet on the circle. */
function towardsThePattern(f: Findings): boolean {
  const parts = f.prepared.shape.factors;
  return [0, 1].some(i => nearestRoot(parts[i], f.x) < BOUNDARY && nearestRoot(parts[i + 2], f.x) < 1 + 1e-3);
}

type Caution = (code: string, text: string) => void;

function rootFlags(f: Findings, caution: Caution): void {
  const [ar, sar, ma, sma] = f.prepared.shape.factors.map(part => nearestRoot(part, f.x));
  const season = f.prepared.seasonLength;
  if (ar < NEAR_UNIT) caution("nearUnitRoot", `An autoregressive root lies at ${digits(ar)}, ${ar < 1 ? "inside" : "close to"} the unit circle: the process ${ar < 1 ? "grows without bound" : "hardly returns to a mean"}. Consider ${f.prepared.lost > 0 ? "another difference" : "differencing"}, and check with the stationarity tests.`);
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
    if (least < CANCEL) caution("nearCancelling", `${word ? "A seasonal" : "An"} autoregressive and a ${word}moving-average factor nearly cancel (inverse roots ${least.toFixed(3)} apart, near ${at.toFixed(2)}): the data cannot tell them from none. Drop one ${word}lag on each side.`);
  }
}

/** Estimates that move together: lag coefficients with each other, with the mean, with regressors. (Regressors among themselves are
 *  told by their inflation; a mean that moves with a regressor far from zero is only a matter of where zero lies.) */
function correlated(f: Findings, caution: Caution): void {
  if (f.covariance === null) return;
  const names = [...f.lags, ...f.columns.map(coefficientOf)], size = names.length;
  const pairs: { a: string; b: string; r: number }[] = [];
  for (let j = 0; j < f.lags.length; j++) for (let i = j + 1; i < size; i++) {
    const r = correlationAt(f.covariance, size, i, j);
    if (Math.abs(r) > CORRELATED) pairs.push({ a: names[j], b: names[i], r });
  }
  if (pairs.length === 0) return;
  const [worst, ...rest] = pairs.sort((a, b) => Math.abs(b.r) - Math.abs(a.r));
  const also = rest.length === 0 ? "" : ` (so are ${rest.slice(0, 3).map(p => `${p.a} and ${p.b}, ${minus(p.r)}`).join("; ")}${rest.length > 3 ? `; and ${rest.length - 3} more` : ""})`;
  caution("correlated", `The estimates of ${worst.a} and ${worst.b} are correlated ${minus(worst.r)}${also}: the data hardly tell one from the other, and each alone means little. Try the model without one of them.`);
}

function coefficientOf(column: string): string { return column === MEAN ? MEAN : `the coefficient of ${column}`; }

function columnOf(f: Findings, name: string): Float64Array { return differencedRegressor(f.prepared.delta, f.prepared.columns[f.prepared.names.indexOf(name)]); }

/** Regressors of which nothing is left in the sample. */
function goneText(f: Findings, names: readonly string[]): string {
  const one = names.length === 1, shown = one ? names[0] : `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`;
  return `The regressor${one ? "" : "s"} ${shown} ${one ? "is" : "are"} 0 throughout the sample${f.prepared.lost > 0 ? " after differencing" : ""}, so ${one ? "it was" : "they were"} left out (coefficient 0, no standard error). Remove ${one ? "it" : "them"}, or take a sample in which ${one ? "it varies" : "they vary"}.`;
}

function aliasText(f: Findings, name: string): string {
  const differenced = f.prepared.lost > 0 ? " after differencing" : "";
  const left = "so it was left out (coefficient 0, no standard error).";
  if (name === MEAN) return `The mean${f.prepared.lost > 0 ? " (a drift)" : ""} is a linear combination of the regressors${differenced}, ${left} Write mean: false, or remove one of the regressors.`;
  const column = columnOf(f, name), size = Math.abs(column[0]);
  if (column.every(v => Math.abs(v - column[0]) <= 1e-12 * size || Number.isNaN(v))) return `The regressor ${name} is the same throughout the sample${differenced}, as the mean is, ${left} Remove it, or take a sample in which it varies.`;
  return `The regressor ${name} is a linear combination of the other regressors${f.columns.includes(MEAN) ? " and the mean" : ""}${differenced}: its coefficient cannot be told from theirs, ${left} Remove it, or one of the others.`;
}

/** Regressors that the others nearly replace. */
function inflated(f: Findings, caution: Caution): void {
  if (f.covariance === null) return;
  const size = f.lags.length + f.columns.length, own = [...f.columns.keys()].filter(j => f.columns[j] !== MEAN), at = own.map(j => f.lags.length + j);
  const factors = inflation(f.covariance, size, at);
  const found = own.map((j, i) => ({ name: f.columns[j], factor: factors[i], at: at[i] })).filter(r => r.factor > INFLATED).sort((a, b) => b.factor - a.factor);
  if (found.length === 0) return;
  const [worst] = found, others = at.filter(i => i !== worst.at);
  const near = others.reduce((best, i) => Math.abs(correlationAt(f.covariance!, size, i, worst.at)) > Math.abs(correlationAt(f.covariance!, size, best, worst.at)) ? i : best, others[0]);
  const times = worst.factor < 1e4 ? worst.factor.toPrecision(2) : "over 10000";
  caution("collinear", `The regressor${found.length === 1 ? "" : "s"} ${found.slice(0, 4).map(r => r.name).join(", ")}${found.length > 4 ? ` and ${found.length - 4} more` : ""} can hardly be told from the rest: the variance of ${worst.name}'s coefficient is ${Number(times) ? Number(times) : times} times what it would be alone, mostly for ${f.columns[near - f.lags.length]}. Remove one of them, or combine them into one.`);
}

function minus(r: number): string { return r.toFixed(2).replace("-", "−"); }
