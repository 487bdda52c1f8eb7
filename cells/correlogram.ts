// The kind that shows autocorrelations and partial autocorrelations on one lag axis, and what they suggest.

import { correlogram as compute, extendedAcf, offsetBetween, prewhitenedCcf, smallestCanonical, theoreticalAcf, theoreticalPacf, type Correlogram, type Fit, type OrderTable, type PrewhitenedCcf, type Series } from "../stdlib/index.ts";
import { OptionError, type Kind, type OptionTable, type RunContext } from "./kind.ts";
import { correlogramParts } from "./parts/correlogramParts.ts";
import { leaderText } from "./parts/leaderText.ts";
import { needLevel, needVaryingSeries, plainly } from "./parts/needs.ts";
import { scaleText } from "./parts/scale.ts";
import { count } from "./parts/words.ts";

export interface CorrelogramCell {
  readonly series: unknown;
  readonly lags?: number;
  readonly level?: number;
  readonly band?: "independent" | "bartlett";
  readonly partial?: "levinson" | "regression" | "burg";
  /** A fit whose own correlations are laid over the sample's. */
  readonly model?: Fit;
  /** A second series, which may lead the first. */
  readonly with?: unknown;
}

/** A correlogram with what it is of, and a model's own correlations from lag 0 where a model was given. */
export interface ShownCorrelogram extends Correlogram {
  readonly of: string;
  /** Tables that read mixed orders; null where a cut-off already suggests pure ones, or where the data cannot carry them. */
  readonly mixed: { readonly extended: OrderTable; readonly canonical: OrderTable } | null;
  /** Cross-correlations after prewhitening, positive lags where the second series leads; null without one. `toTry`: how a fit
   *  would use it, where it leads. */
  readonly cross: (PrewhitenedCcf & { readonly of: string; readonly name: string; readonly toTry: string | null }) | null;
  readonly theory: { readonly label: string; readonly acf: Float64Array; readonly pacf: Float64Array } | null;
}

const correlogramOptions: OptionTable = {
  series: { type: "series", required: true, sentence: "The series whose correlations with its own past are wanted; a fit's residuals are fit.residuals.", example: "steady" },
  lags: { type: "integer", min: 1, sentence: "The largest lag; without this option, up to three seasons where the data allow, else ten times the decimal logarithm of their number." },
  level: { type: "level", default: 0.95, sentence: "Confidence of the bands, a share between 0 and 1." },
  band: { type: { oneOf: ["independent", "bartlett"] }, default: "independent", sentence: "The band of the autocorrelations: that of independent observations, or Bartlett's, which supposes a moving average of one order less than the lag." },
  partial: { type: { oneOf: ["levinson", "regression", "burg"] }, default: "levinson", sentence: "How partial autocorrelations are computed: the Levinson recursion, regressions on the lags, or Burg's recursion." },
  model: { type: "fit", sentence: "A fit whose own autocorrelations are laid over the sample's.", example: "airline" },
  with: { type: "series", sentence: "A second series that may lead the first: their cross-correlations after prewhitening are shown, on lags to both sides. Both should be stationary.", example: "price" },
};

/** Correlations by lag with bands, portmanteau tests, and orders to begin with. */
export const correlogram: Kind<CorrelogramCell, ShownCorrelogram> = {
  name: "correlogram",
  sentence: "Autocorrelations and partial autocorrelations with bands, portmanteau tests, and what they suggest.",
  options: correlogramOptions,
  body: "options",
  callable: true,
  example: "series: steady",
  run: (options, context) => runCorrelogram(options, context),
  show: result => correlogramParts(result),
};

async function runCorrelogram(options: CorrelogramCell, context: RunContext): Promise<ShownCorrelogram> {
  const series = needVaryingSeries(options.series, 3, "a correlogram");
  const lags = options.lags ?? undefined;
  if (lags !== undefined && (!Number.isInteger(lags) || lags < 1 || lags >= series.n)) {
    throw new OptionError("lags", `lags is ${lags}; with ${count(series.n, "value")} it can be a whole number from 1 to ${series.n - 1}`);
  }
  const result = plainly(() => compute({ series, lags, level: needLevel(options.level), band: options.band ?? "independent", partial: options.partial ?? "levinson" }));
  await context.breathe();
  return { ...result, of: scaleText(series), cross: crossOf(options.with, series, result.lags, result.level, context.source.with), mixed: await mixedTables(result, series, context), theory: options.model ? theoryOf(options.model, result.lags) : null };
}

/** Lags to each side as many as the series' own, and at most a third of what both series have. */
function crossOf(other: unknown, series: Series, lags: number, level: number, source: string | undefined): ShownCorrelogram["cross"] {
  if (other === undefined || other === null) return null;
  const leader = needVaryingSeries(other, 10, "a cross-correlation", "with");
  return plainly(() => {
    const offset = offsetBetween(leader, series), shared = Math.min(leader.n, offset + series.n) - Math.max(0, offset);
    const cross = prewhitenedCcf(leader, series, Math.max(1, Math.min(lags, Math.floor(shared / 3))), { level }), lag = cross.strongest?.lag ?? -1;
    return { ...cross, of: scaleText(leader), name: leader.name || "the second series", toTry: lag < 0 ? null : leaderText(series, leader, source ?? leader.name, lag) };
  });
}

/** Where neither kind of correlation cuts off the rule of thumb has no more to say, and tables made for mixed models begin;
 *  not where a difference must come first. */
async function mixedTables(result: Correlogram, series: Series, context: RunContext): Promise<ShownCorrelogram["mixed"]> {
  if (result.status !== "ok" || result.differenceFirst !== null || result.suggests.ar === 0 || result.suggests.ma === 0) return null;
  const extended = extendedAcf(series);
  await context.breathe();
  const canonical = smallestCanonical(series);
  return extended.status === "ok" && canonical.status === "ok" ? { extended, canonical } : null;
}

function theoryOf(model: Fit, lags: number): NonNullable<ShownCorrelogram["theory"]> {
  return { label: model.label, acf: theoreticalAcf(model, lags), pacf: theoreticalPacf(model, lags) };
}
