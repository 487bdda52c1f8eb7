// Estimation of an ARMA-type model: what an analyst asks for, and what comes back.

import { conditionalEstimate } from "./conditional.ts";
import { autoregression } from "./autoregression.ts";
import { estimate } from "./estimate.ts";
import type { Estimate, Evaluate } from "./search.ts";
import { filterEvaluate } from "./filterEvaluate.ts";
import { edgesOf, type Edges } from "./edges.ts";
import { inOwnColumns } from "./covariance.ts";
import { flags, MEAN } from "./flags.ts";
import { informationAt } from "./information.ts";
import { gradientInto } from "./gradient.ts";
import { valueAt } from "./likelihood.ts";
import { makeWork, type Work } from "./work.ts";
import type { Fit, FitOptions, Note } from "./model.ts";
import { numbersOf, parameterCount, type Numbers } from "./numbers.ts";
import { prepare, type Prepared } from "./prepare.ts";
import { isStable } from "./region.ts";
import { assemble, criteria, type Solution } from "./report.ts";
import type { Smaller } from "./smaller.ts";

export interface FitHow {
  /** False leaves standard errors out (NaN): for grids and rolling refits, where nobody reads them. */
  readonly standardErrors?: boolean;
  /** False leaves residuals out (NaN): for many refits of which only the coefficients are read. */
  readonly residuals?: boolean;
  /** Coefficients phi, Phi, theta, Theta to start from. */
  readonly near?: Float64Array;
  /** Fits of smaller models to the same series, all else alike: places to start from, in a search through orders. */
  readonly smaller?: Smaller;
}

/** Fits phi(B) Phi(B^s) (w - mean) = theta(B) Theta(B^s) e to a series, w its values (after its steps), less the regressors.
 *  The steps `difference` that end the series' steps are known to the model: regressors are differenced alike, and with
 *  missing values the likelihood is that of the levels with a diffuse start, so that one gap costs one observation.
 *  @throws RangeError in words when the data cannot answer or the request does not fit together
 *  Method "exact": Gaussian maximum likelihood (Newbold 1974; Ljung & Box 1979; Harvey & Phillips 1979), several starts.
 *  Method "restricted": the mean's and the regressors' coefficients are integrated out of the likelihood (Harville 1974; Tunnicliffe
 *  Wilson 1989), the better practice for short series near a unit root or with many regressors: of 3,000 simulated AR(1) at 0.9 with
 *  n = 50 and a mean, the exact likelihood's coefficient is 0.077 too low and the mean's 95% interval holds 75%; the restricted
 *  one's 0.037 and 82% (with six regressors 0.121 and 66%; 0.047 and 80%). "exact" stays the default: only its criteria compare
 *  models with different regressors.
 *  Cost: a few passes over the data, each n times the number of non-zero lags plus g^3, g the longest lag.
 *  @example fit({ series: flow, ar: 1 }).phi[0] */
export function fit(options: FitOptions, how: FitHow = {}): Fit {
  const prepared = prepare(options);
  const method = options.method ?? "exact";
  const explosive = heldOutside(prepared);
  const exact = numbersOf(prepared, explosive), numbers = method === "restricted" ? restricted(exact) : exact;
  const work = makeWork(prepared.shape, numbers.data);
  // The filter takes what the recursion cannot: many gaps, and moving averages held with roots inside the unit circle.
  const filter = explosive || (numbers.gaps.length > 0 && numbers.data.gaps === 0);
  const evaluator = (of: Numbers): Evaluate => filter ? filterEvaluate(of, work) : {
    value: x => valueAt(work, of.data, x),
    gradientInto: (x, g) => gradientInto(work, of.data, x, g),
  };
  const evaluate = evaluator(numbers);
  if (method === "exact" || method === "restricted") {
    const found = estimate({ shape: prepared.shape, data: numbers.data, held: prepared.held, bridged: numbers.bridged, near: how.near, smaller: method === "exact" && prepared.held.every(Number.isNaN) ? how.smaller : undefined, work, evaluate: filter ? evaluate : undefined });
    if (!Number.isFinite(found.value)) throw new RangeError(failure(prepared));
    const result = finish(numbers, work, found, evaluate, how);
    if (method === "exact") return result;
    const value = evaluator({ ...exact, data: { ...exact.data, sigma2: result.sigma2 / exact.unit ** 2 } }).value(found.x);
    return { ...result, ...likelihoodAnd(-value - exact.n * Math.log(exact.unit), result.k, exact.n), method, notes: [RESTRICTED, ...result.notes] };
  }
  const solution = method === "conditional" ? conditionalEstimate(numbers) : autoregression(numbers, method);
  const value = evaluate.value(solution.x);
  const free = Int32Array.from([...prepared.held.keys()].filter(i => Number.isNaN(prepared.held[i])));
  const whole: Solution = { ...solution, numbers, work, free, stationary: Number.isFinite(value), method, notes: [...solution.notes, likelihoodNote(value)] };
  const result = assemble(whole);
  return { ...result, notes: [...result.notes, ...flagsOf(result, whole)] };
}

const RESTRICTED: Note = { code: "restricted", tone: "note", text: "Estimated by restricted maximum likelihood: variance and lag coefficients allow for what the mean and the regressors take from the data. The log-likelihood and the criteria are those of the exact likelihood at these estimates." };

/** The same question with the coefficients of mean and regressors integrated out. */
function restricted(numbers: Numbers): Numbers {
  return { ...numbers, data: { ...numbers.data, integrated: numbers.data.columns.length, constant: false } };
}

function likelihoodAnd(logLikelihood: number, k: number, n: number): Pick<Fit, "logLikelihood" | "aic" | "aicc" | "bic"> {
  return { logLikelihood, ...criteria(logLikelihood, k, n) };
}

function likelihoodNote(value: number): Note {
  return Number.isFinite(value)
    ? { code: "likelihood", tone: "note", text: "The log-likelihood and the criteria are those of the exact likelihood at these estimates." }
    : { code: "notStationary", tone: "caution", text: "The estimates lie outside the region of stationarity: there is no exact likelihood and no criterion at them, and nothing can be predicted from them. Difference the series, or use method: \"exact\"." };
}

function failure(p: Prepared): string {
  const heldAr = p.held.some((v, i) => !Number.isNaN(v) && i < p.shape.ar.plain.length + p.shape.ar.seasonal.length);
  return heldAr
    ? "fit: the coefficients held on the autoregressive side are not stationary (a root lies on or inside the unit circle), so the model has no likelihood; hold smaller values, or difference the series"
    : "fit: no stationary model of these orders could be evaluated for this series; try fewer lags, or difference it";
}

/** A moving-average factor wholly held at values with roots inside the unit circle: legal, with a likelihood of its own. */
function heldOutside(p: Prepared): boolean {
  return p.shape.factors.some(f => {
    const c = p.held.subarray(f.from, f.from + f.lags.length);
    return f.sign < 0 && f.lags.length > 0 && !c.some(Number.isNaN) && !isStable(f.lags, c, f.sign, true);
  });
}

function finish(numbers: Numbers, work: Work, found: Estimate, evaluate: Evaluate, how: FitHow): Fit {
  const { prepared } = numbers;
  const notes: Note[] = [];
  const { x, free } = found;
  const edges = edgesOf(prepared, x, free);
  let information = null;
  if (how.standardErrors === false || edges.side === "stationarity") evaluate.value(x);
  else {
    information = informationAt(work, numbers.data, x, free, evaluate, found.hessian, edges);
    if (information.covariance === null) notes.push({ code: "noStandardErrors", tone: "caution", text: "Standard errors are not available: the information matrix is singular at the estimates, so some combination of the parameters is not determined by the data. Take fewer lags or regressors." });
  }
  if (how.standardErrors !== false && edges.side !== "none") notes.push({ code: "noStandardErrors", tone: "caution", text: edgeText(prepared, free, edges) });
  const solution: Solution = {
    x, numbers, work, free, information, converged: found.converged, method: "exact", stationary: true, notes,
    beta: work.beta.slice(numbers.data.gaps), logLikelihood: -found.value, residuals: how.residuals,
  };
  const result = assemble(solution);
  return { ...result, notes: [...result.notes, ...flagsOf(result, solution)] };
}

function edgeText(p: Prepared, free: Int32Array, edges: Edges): string {
  if (edges.side === "stationarity") return "Standard errors are not available: an autoregressive root lies on the unit circle, the edge of the region, where the usual normal approximation does not hold.";
  const names = edges.without.map(i => coefficientName(p, free[i])), rest = free.length > names.length || p.hasMean || p.names.length > 0;
  return `No standard error is available for ${listed(names)}: a moving-average root lies on the unit circle, the edge of the region, where the usual normal approximation does not hold.${rest ? " The other standard errors take that root as known." : ""}`;
}

function listed(names: readonly string[]): string { return names.length < 2 ? names.join("") : `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`; }

function flagsOf(result: Fit, s: Solution): Note[] {
  const { prepared } = s.numbers;
  const lags = [...s.free].map(i => coefficientName(prepared, i));
  const columns = s.numbers.kept.map(j => j < 0 ? MEAN : prepared.names[j]);
  const covariance = s.information?.covariance ?? null;
  return flags({
    prepared, x: s.x, converged: result.converged, n: result.n, k: parameterCount(prepared) - s.numbers.aliased.length, lags, columns,
    covariance: covariance === null ? null : inOwnColumns(covariance, s.free.length, s.numbers.basis),
    aliased: s.numbers.aliased.map(j => j < 0 ? MEAN : prepared.names[j]), gaps: s.numbers.gaps.length, sigma2: result.sigma2, variance: s.numbers.unit ** 2,
  });
}

/** "AR lag 1", "seasonal MA lag 24": as the page names them. */
function coefficientName(p: Prepared, at: number): string {
  const words = ["AR", "seasonal AR", "MA", "seasonal MA"];
  const parts = p.shape.factors;
  const which = parts.findIndex(f => at < f.from + f.lags.length);
  return `${words[which]} lag ${parts[which].lags[at - parts[which].from]}`;
}
