// The equation of a fitted model with its numbers: in backshift form and written out, as TeX and as plain text.

import type { AppliedStep, Fit } from "../../stdlib/index.ts";
import type { EquationPart } from "./part.ts";
import { differenceLags, originalName, scaleText } from "./scale.ts";

/** A symbol in both forms. */
interface Both { readonly tex: string; readonly text: string }

/** phi(B) Phi(B^s) (differences of (z - regressors) - mean) = theta(B) Theta(B^s) e, numbers in place of the letters.
 *  @param width  of the column it is set in, in pixels */
export function backshiftEquation(fit: Fit, width = 640): EquationPart {
  const factors = [
    polynomial(fit.phi, 1, -1), polynomial(fit.seasonalPhi, fit.seasonLength, -1),
  ].filter(isGiven);
  const differences = differenceLags(fit.series.steps).map(lag => differenceFactor(lag)), regression = regressionLine(fit, width);
  const inner = product([...differences, regression === null ? at(scaleSymbol(fit).inner, 0) : at(symbol("n", "n"), 0)]);
  const level = fit.mean === 0 ? inner : bracket(join([differences.length === 0 ? unbracketed(inner) : inner, signed(-fit.mean)]));
  const right = [
    polynomial(fit.theta, 1, 1), polynomial(fit.seasonalTheta, fit.seasonLength, 1), symbol("\\varepsilon_t", "e[t]"),
  ].filter(isGiven);
  const left = product([...factors, level]), shocks = product(right), variance = number(fit.sigma2);
  // Sides that are long for their column stand below each other, and the variance below them.
  const room = width / LETTER, whole = left.text.length + shocks.text.length;
  const long = whole > room, below = long ? shocks.text.length + 20 > room : whole + 20 > room;
  const leftSide = left.text.length > room && factors.length > 0 ? `${product(factors).tex} \\\\ & \\quad ${level.tex}` : left.tex;
  const sides = long ? `& ${leftSide} \\\\ & \\quad {} = ${shocks.tex}` : `& ${leftSide} = ${shocks.tex}`;
  return {
    part: "equation", title: "Backshift form",
    tex: `\\begin{aligned} ${regression === null ? "" : `& ${regression.tex.replace("&", "")} \\\\ `}${sides}, ${below ? "\\\\ &" : "\\qquad"} \\operatorname{var}\\varepsilon_t = ${variance.tex} \\end{aligned}`,
    text: `${regression === null ? "" : `${regression.text}; `}${left.text} = ${shocks.text}, var e = ${variance.text}; ${legend(fit)}`,
  };
}

/** What a letter of the plain form takes when it is set, on average, in pixels. */
const LETTER = 7.2;

/** The same with all products carried out: the value of a period from earlier values and shocks. */
export function writtenOutEquation(fit: Fit, width = 640): EquationPart {
  const autoregressive = multiplyOut([
    lagPolynomial(fit.phi, 1, -1), lagPolynomial(fit.seasonalPhi, fit.seasonLength, -1),
    ...differenceLags(fit.series.steps).map(lag => differencePolynomial(lag)),
  ]);
  const movingAverage = multiplyOut([lagPolynomial(fit.theta, 1, 1), lagPolynomial(fit.seasonalTheta, fit.seasonLength, 1)]);
  const { inner, name } = scaleSymbol(fit), regression = regressionLine(fit, width);
  const of = (lag: number): Both => at(regression === null ? inner : symbol("n", "n"), lag);
  const terms: Both[] = [];
  if (fit.constant !== 0) terms.push(number(fit.constant));
  autoregressive.forEach((value, lag) => { if (lag > 0 && value !== 0) terms.push(times(-value, of(lag))); });
  movingAverage.forEach((value, lag) => { if (value !== 0) terms.push(times(value, at(symbol("\\varepsilon", "e"), lag))); });
  const lines = broken(terms, width);
  const lead = of(0);
  return {
    part: "equation", title: `Written out: ${name} from earlier values and shocks`,
    tex: `\\begin{aligned} ${regression ? `${regression.tex} \\\\ ` : ""}${lead.tex} = {} & ${lines.join(" \\\\ & ")} \\end{aligned}`,
    text: `${regression ? `${regression.text}; ` : ""}${lead.text} = ${join(terms).text}`,
  };
}

/** What the letters stand for. */
export function legend(fit: Fit): string {
  const unit = fit.series.steps[0]?.before.unit || fit.series.unit;
  const letter = scaleSymbol(fit).inner.text === "z" ? `z is ${scaleText({ ...fit.series, steps: fit.series.steps.filter(step => step.step !== "difference") })}` : `y is ${originalName(fit.series)}${unit ? ` (${unit})` : ""}`;
  const regressed = Object.keys(fit.beta).length > 0 ? ", n what the regressors leave" : "";
  const level = fit.mean === 0 ? "" : `, ${number(fit.mean).text} the ${differenceLags(fit.series.steps).length > 0 ? "drift (the mean of the differences)" : "process mean"}, ${number(fit.constant).text} the equation's constant`;
  return `${letter}${regressed}${level}, ε (in plain text: e) the shock of the period, B the step back by one period`;
}

const symbol = (tex: string, text: string): Both => ({ tex, text });
const isGiven = (part: Both | null): part is Both => part !== null;

/** Three decimals, more where a number is small: what an equation needs to be used by hand. */
function number(value: number): Both {
  const size = Math.abs(value);
  if (!Number.isFinite(value)) return symbol("\\text{?}", "?");
  if (size === 0) return symbol("0", "0");
  if (size >= 1e6 || size < 1e-4) {
    const [mantissa, exponent] = value.toExponential(3).split("e");
    return symbol(`${mantissa}\\times 10^{${Number(exponent)}}`, `${mantissa}e${Number(exponent)}`);
  }
  const digits = size >= 100 ? 1 : size >= 0.1 ? 3 : Math.min(7, 3 - Math.floor(Math.log10(size)));
  const text = value.toFixed(digits);
  return symbol(text, text);
}

function signed(value: number): Both {
  const shown = number(Math.abs(value));
  const sign = value < 0 ? "-" : "+";
  return symbol(`${sign} ${shown.tex}`, `${sign} ${shown.text}`);
}

function times(coefficient: number, of: Both): Both {
  const size = Math.abs(coefficient);
  const sign = coefficient < 0 ? "-" : "";
  if (Math.abs(size - 1) < 1e-12) return symbol(`${sign}${of.tex}`, `${sign}${of.text}`);
  const shown = number(size);
  return symbol(`${sign}${shown.tex}\\,${of.tex}`, `${sign}${shown.text} ${of.text}`);
}

/** A sum of terms; each may begin with its sign. */
function join(terms: readonly Both[]): Both {
  if (terms.length === 0) return symbol("0", "0");
  const add = (form: "tex" | "text"): string => terms.map((term, i) => {
    const piece = term[form];
    if (i === 0) return piece;
    if (piece.startsWith("- ") || piece.startsWith("+ ")) return piece;
    return piece.startsWith("-") ? `- ${piece.slice(1)}` : `+ ${piece}`;
  }).join(" ");
  return symbol(add("tex"), add("text"));
}

function bracket(part: Both): Both { return symbol(`\\bigl(${part.tex}\\bigr)`, `(${part.text})`); }
/** A sum that stands in a bracket of its own loses it inside another. */
function unbracketed(part: Both): Both { return symbol(part.tex.replace(/^\\bigl\(([\s\S]*)\\bigr\)$/, "$1"), part.text.replace(/^\(([\s\S]*)\)$/, "$1")); }
function product(parts: readonly Both[]): Both { return symbol(parts.map(p => p.tex).join("\\,"), parts.map(p => p.text).join(" ")); }

/** (1 - 0.43 B - 0.20 B^2), or null when there is no coefficient. `sign` is -1 for autoregressive factors. */
function polynomial(coefficients: Float64Array, length: number, sign: 1 | -1): Both | null {
  const terms: Both[] = [symbol("1", "1")];
  coefficients.forEach((value, i) => { if (value !== 0) terms.push(times(sign * value, backshift((i + 1) * length))); });
  if (terms.length === 1) return null;
  const sum = join(terms);
  return symbol(`(${sum.tex})`, `(${sum.text})`);
}

function backshift(lag: number): Both { return lag === 1 ? symbol("B", "B") : symbol(`B^{${lag}}`, `B^${lag}`); }
function differenceFactor(lag: number): Both { return symbol(`(1 - ${backshift(lag).tex})`, `(1 - ${backshift(lag).text})`); }

/** What the regressors leave of the scale before the differences; null without regressors. */
function regressionLine(fit: Fit, width: number): Both | null {
  const parts = Object.entries(fit.beta).map(([name, value]) => times(-value, regressor(name)));
  if (parts.length === 0) return null;
  const lines = broken([at(scaleSymbol(fit).inner, 0), ...parts], width);
  return symbol(`n_t = {} & ${lines.join(" \\\\ & \\quad ")}`, `n[t] = ${join([at(scaleSymbol(fit).inner, 0), ...parts]).text}`);
}

/** Names of regressors may hold any letters: TeX's special ones are set as themselves. */
function regressor(name: string): Both {
  const safe = name.replace(/[\\{}$&#^_%~]/g, mark => mark === "\\" ? "/" : mark === "^" || mark === "~" ? " " : `\\${mark}`);
  return symbol(`\\text{${safe}}_t`, `${name}[t]`);
}

/** The scale before differencing: y itself, log y, or z where the steps have no short symbol. */
function scaleSymbol(fit: Fit): { inner: Both; name: string } {
  let inner = symbol("y", "y");
  let open = true;
  for (const step of fit.series.steps) {
    if (step.step === "difference") continue;
    const next = open ? stepSymbol(inner, step) : null;
    if (next === null) { open = false; inner = symbol("z", "z"); } else inner = next;
  }
  return { inner, name: inner.text === "y" ? originalName(fit.series) : inner.text === "z" ? "z, the transformed series," : `${inner.text} of ${originalName(fit.series)}` };
}

function stepSymbol(inner: Both, step: AppliedStep): Both | null {
  if (step.step === "log" && inner.text === "y") return symbol("\\log y", "log y");
  if (step.step === "boxCox" && inner.text === "y") return symbol(`y^{(${Number(step.lambda.toFixed(3))})}`, `y^(${Number(step.lambda.toFixed(3))})`);
  if (step.step === "fill" || step.step === "aggregate") return inner;
  return null;
}

function at({ tex, text }: Both, lag: number): Both {
  const index = lag === 0 ? "t" : `t-${lag}`;
  // A power already stands on "y^{(0.3)}": the index goes below the same letter.
  return symbol(`${tex}_{${index}}`, `${text}[${index}]`);
}

function lagPolynomial(coefficients: Float64Array, length: number, sign: 1 | -1): number[] {
  const result = zeros(coefficients.length * length + 1);
  result[0] = 1;
  coefficients.forEach((value, i) => { result[(i + 1) * length] = sign * value; });
  return result;
}

function differencePolynomial(lag: number): number[] {
  const result = zeros(lag + 1);
  result[0] = 1;
  result[lag] = -1;
  return result;
}

function zeros(length: number): number[] { return Array.from({ length }, () => 0); }

function multiplyOut(factors: readonly (readonly number[])[]): readonly number[] {
  let product = [1];
  for (const factor of factors) {
    const next = zeros(product.length + factor.length - 1);
    product.forEach((a, i) => { if (a !== 0) factor.forEach((b, j) => { next[i + j] += a * b; }); });
    product = next;
  }
  // Cancelled terms leave rounding dust, which must not be printed as terms.
  return product.map(value => Math.abs(value) < 1e-14 ? 0 : value);
}

/** A long sum in lines of a few terms, so that it fits its column with the left-hand side. */
function broken(terms: readonly Both[], width: number): readonly string[] {
  const letters = terms.reduce((sum, term) => sum + term.text.length + 3, 0) / Math.max(1, terms.length);
  const size = Math.max(1, Math.min(5, Math.floor((width / LETTER - 12) / letters)));
  const lines: string[] = [];
  for (let from = 0; from < terms.length; from += size) {
    const line = join(terms.slice(from, from + size)).tex;
    lines.push(from === 0 ? line : line.startsWith("-") ? `{} - ${line.slice(1)}` : `{} + ${line}`);
  }
  return lines.length === 0 ? ["0"] : lines;
}
