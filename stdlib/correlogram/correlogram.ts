// The correlogram: both correlations on one lag axis, their bands, portmanteau tests, and what the rule of thumb reads from them.

import { normalQuantile } from "../distributions/normal.ts";
import type { PortmanteauRow } from "../diagnostics/portmanteau.ts";
import { portmanteauRows, whyNot } from "../diagnostics/portmanteau.ts";
import { observedOf } from "../diagnostics/subject.ts";
import { printedP } from "../diagnostics/test.ts";
import { defaultSeasonLength } from "../series/every.ts";
import type { Series } from "../series/series.ts";
import { isSeries, makeSeries, valuesOf } from "../series/series.ts";
import { acf as sampleAcf } from "./acf.ts";
import { bartlettBand, checkLevel, independentBand } from "./bands.ts";
import type { PartialMethod } from "./pacf.ts";
import { pacf as samplePacf } from "./pacf.ts";
import type { Suggestion } from "./suggestOrders.ts";
import { suggestOrders } from "./suggestOrders.ts";

export interface CorrelogramOptions {
  readonly series: Series | ArrayLike<number>;
  /** Largest lag; default enough for three seasons where the data allow, else 10 log10 n. */
  readonly lags?: number | null;
  readonly level?: number;
  readonly band?: "independent" | "bartlett";
  readonly partial?: PartialMethod;
  /** Periods a season, for the seasonal lags; default from the spacing; null for none. */
  readonly seasonLength?: number | null;
  /** Lags of the portmanteau rows; default a few round ones. */
  readonly portmanteau?: readonly number[];
}

export interface Correlogram {
  readonly status: "ok" | "unavailable";
  /** Length lags + 1, from lag 0. */
  readonly acf: Float64Array; readonly pacf: Float64Array;
  /** Half-widths by lag; index 0 is 0. */
  readonly band: { readonly acf: Float64Array; readonly pacf: Float64Array };
  /** Lags whose correlation is outside its band. */
  readonly outside: { readonly acf: readonly number[]; readonly pacf: readonly number[] };
  readonly suggests: Suggestion;
  /** Where the correlations die out too slowly for orders to be read: at the low lags ("level") or the seasonal ones. */
  readonly differenceFirst: "level" | "season" | null;
  readonly lags: number;
  readonly n: number; readonly observed: number;
  readonly level: number;
  readonly bandKind: "independent" | "bartlett";
  readonly seasonLength: number | null;
  readonly seasonalLags: readonly number[];
  readonly portmanteau: readonly PortmanteauRow[];
  readonly notes: readonly string[];
  readonly sentence: string;
}

/** Computes a correlogram.
 *  @throws RangeError if lags or level is out of range, or the band is neither "independent" nor "bartlett" */
export function correlogram(options: CorrelogramOptions): Correlogram {
  const { level = 0.95, band = "independent", partial = "levinson" } = options;
  checkLevel("correlogram", level);
  if (band !== "independent" && band !== "bartlett") throw new RangeError(`correlogram: band is "${String(band)}", expected "independent" or "bartlett"`);
  const series = isSeries(options.series) ? options.series : makeSeries({ name: "", values: valuesOf(options.series) });
  const n = series.n, observed = observedOf(series.values).length;
  const seasonLength = options.seasonLength === undefined ? defaultSeasonLength(series.every) : options.seasonLength;
  const asked = options.lags ?? defaultLags(n, seasonLength);
  if (n < 3) return empty(n, observed, level, band, `${n === 1 ? "one value is" : `${n} values are`} too few for a correlogram`);
  const all = sampleAcf(series, asked);
  // Gaps can leave a lag without one complete pair: the correlogram then ends before it.
  const unknown = all.findIndex((v) => !Number.isFinite(v));
  const lags = unknown < 0 ? asked : unknown - 1;
  if (lags < 1) return empty(n, observed, level, band, whyNot(series.values, observed));
  const r = all.slice(0, lags + 1);
  const p = samplePacf(series, lags, partial);
  const flat = new Float64Array(lags + 1).fill(independentBand(observed, level));
  flat[0] = 0;
  const acfBand = band === "bartlett" ? bartlettBand(r, observed, level) : flat;
  const outside = { acf: lagsOutside(r, acfBand), pacf: lagsOutside(p, flat) };
  const suggests = suggestOrders({ acf: r, pacf: p, acfBand, pacfBand: flat, level, seasonLength });
  const chosen = (options.portmanteau ?? defaultPortmanteauLags(lags, seasonLength)).filter((k) => k <= lags || lags === asked);
  const portmanteau = portmanteauRows(series.values, chosen, 0).ljungBox;
  const seasonalLags = seasonLength === null ? [] : Array.from({ length: Math.floor(lags / seasonLength) }, (_, i) => (i + 1) * seasonLength);
  const slow = diesOutSlowly(r, acfBand, seasonalLags);
  return {
    status: "ok", acf: r, pacf: p, band: { acf: acfBand, pacf: flat }, outside, suggests, differenceFirst: slow, lags, n, observed, level, bandKind: band, seasonLength, seasonalLags, portmanteau,
    notes: notesOf({ n, observed, asked, lags, level, slow, band }),
    sentence: sentenceOf(outside, portmanteau, suggests, lags, level, slow),
  };
}

/** Three seasons where they fit into a third of the data, two or one where not; without a season 10 log10 n. Always below n. */
function defaultLags(n: number, seasonLength: number | null): number {
  const usual = Math.max(1, Math.floor(10 * Math.log10(Math.max(n, 2))));
  const seasons = seasonLength === null ? 0 : Math.min(3, Math.floor(n / 3 / seasonLength)) * seasonLength;
  return Math.max(1, Math.min(n - 1, Math.max(seasons, Math.min(usual, Math.floor(n / 2)))));
}

function defaultPortmanteauLags(lags: number, seasonLength: number | null): number[] {
  const round = seasonLength !== null && lags >= seasonLength ? [seasonLength, 2 * seasonLength, 3 * seasonLength] : [5, 10, 20, 30];
  const within = round.filter((k) => k <= lags);
  return within.length > 0 ? within : [lags];
}

function lagsOutside(r: Float64Array, band: Float64Array): number[] {
  const list: number[] = [];
  for (let k = 1; k < r.length; k++) if (Math.abs(r[k]) > band[k]) list.push(k);
  return list;
}

/** "level" or "season" where the correlations fall so slowly that differencing comes before orders; null where not. */
function diesOutSlowly(r: Float64Array, band: Float64Array, seasonalLags: readonly number[]): "level" | "season" | null {
  const near = Math.min(10, r.length - 1);
  let all = near >= 5 && r[1] > 0.8;
  for (let k = 1; k <= near; k++) all &&= r[k] > band[k] && r[k] > 0.35 * r[1];
  if (all) return "level";
  const [first, second, third] = seasonalLags;
  if (second !== undefined && r[first] > 0.5 && r[second] > 0.75 * r[first] && (third === undefined || r[third] > 0.55 * r[first])) return "season";
  return null;
}

function notesOf(facts: { n: number; observed: number; asked: number; lags: number; level: number; slow: string | null; band: string }): string[] {
  const { n, observed, asked, lags, level, slow, band } = facts;
  const notes = [`About ${Math.max(1, Math.round((1 - level) * lags))} of ${lags} lags ${Math.round((1 - level) * lags) > 1 ? "fall" : "falls"} outside ${percent(level)} limits by chance alone.`];
  notes.push(band === "bartlett"
    ? "The band of the autocorrelations at a lag supposes a moving average of one order less (Bartlett 1946); it widens as correlations add up."
    : `The band supposes independent observations: plus or minus ${normalQuantile(0.5 + level / 2).toFixed(2)} over the square root of ${observed}.`);
  if (observed < n) notes.push(`${n - observed} of ${n} values are missing: each lag uses its complete pairs.`);
  if (lags < asked) notes.push(`No two observed values stand ${lags + 1} apart, so the correlogram ends at lag ${lags} of the ${asked} asked for.`);
  if (slow === "level") notes.push("The autocorrelations die out so slowly that a difference, or a trend taken off, comes before any orders.");
  if (slow === "season") notes.push("The autocorrelations at the seasonal lags die out so slowly that a seasonal difference comes before any orders.");
  return notes;
}

function sentenceOf(outside: Correlogram["outside"], rows: readonly PortmanteauRow[], suggests: Suggestion, lags: number, level: number, slow: string | null): string {
  const chance = (1 - level) * lags;
  const last = rows.at(-1);
  const count = outside.acf.length;
  const found = count === 0
    ? `No autocorrelation up to lag ${lags} is outside its ${percent(level)} band`
    : `${count} of ${lags} autocorrelations ${count === 1 ? "is" : "are"} outside the ${percent(level)} band (about ${chance.toFixed(chance < 10 ? 1 : 0)} would be by chance)`;
  const together = last === undefined ? "." : `; together, up to lag ${last.lag}, they are ${last.p < 1 - level ? "larger than" : "no larger than"} chance would make them (${printedP(last.p)}).`;
  if (slow !== null) return `${found}${together} They die out so slowly${slow === "season" ? " at the seasonal lags" : ""} that ${slow === "season" ? "a seasonal difference" : "differencing"} comes first.`;
  return `${found}${together} As a suggestion: ${suggests.reason}.`;
}

function percent(level: number): string {
  return `${Number((100 * level).toPrecision(6))}%`;
}

function empty(n: number, observed: number, level: number, bandKind: "independent" | "bartlett", why: string): Correlogram {
  const none = new Float64Array(0);
  return {
    status: "unavailable", acf: none, pacf: none, band: { acf: none, pacf: none }, outside: { acf: [], pacf: [] },
    suggests: { ar: 0, ma: 0, season: null, cutOff: { acf: null, pacf: null }, reason: why },
    differenceFirst: null, lags: 0, n, observed, level, bandKind, seasonLength: null, seasonalLags: [], portmanteau: [], notes: [why], sentence: `The data cannot answer: ${why}.`,
  };
}
