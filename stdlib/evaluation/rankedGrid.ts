// Fits ranked by an information criterion: rows, weights, ties, words.

import type { Fit, Lags } from "../arma/model.ts";
import { roots } from "../arma/roots.ts";

export type Criterion = "aic" | "aicc" | "bic";

export interface GridRow {
  readonly label: string;
  readonly fit: Fit;
  readonly ar: Lags; readonly ma: Lags; readonly seasonalAr: Lags; readonly seasonalMa: Lags;
  readonly aic: number; readonly aicc: number; readonly bic: number;
  readonly logLikelihood: number; readonly k: number; readonly n: number;
  /** Of the criterion that ranks: how far above the best, and the Akaike weight exp(-difference / 2) as a share of all. */
  readonly difference: number; readonly weight: number;
  /** 1 is the best. */
  readonly rank: number;
  /** Within 2 of the best: as good as it. */
  readonly tied: boolean;
  /** Why the criterion cannot rank it, in words; null where it can. It is then not the best, whatever its criterion. */
  readonly setAside: string | null;
  /** Cautions of the fit in words (not converged, root near the unit circle, factors that nearly cancel). */
  readonly cautions: readonly string[];
}

export interface GridFailure { readonly label: string; readonly reason: string }

export interface Grid {
  readonly models: readonly GridRow[];
  readonly best: GridRow | null;
  readonly rankedBy: Criterion;
  readonly failures: readonly GridFailure[];
  /** Orders asked for, and tried before the work was stopped, if it was. */
  readonly asked: number; readonly tried: number; readonly complete: boolean;
  readonly sentence: string;
  readonly notes: readonly string[];
}

/** What `fit` is asked for. */
export interface Order { readonly ar: Lags; readonly ma: Lags; readonly seasonalAr: Lags; readonly seasonalMa: Lags }

/** Ranks fits, smallest criterion first. The best, and what differences and weights are counted from, is the first that the
 *  criterion can rank; one that it cannot is the best only where all are such. */
export function ranked(fits: readonly { readonly order: Order; readonly fit: Fit }[], failures: readonly GridFailure[], rank: Criterion, asked: number, tried: number): Grid {
  const sorted = fits.map((each) => ({ ...each, setAside: whyAside(each.fit) })).sort((a, b) => a.fit[rank] - b.fit[rank]);
  const allAside = sorted.every((s) => s.setAside !== null), counts = sorted.map((s) => allAside || s.setAside === null);
  const first = counts.indexOf(true), least = first < 0 ? NaN : sorted[first].fit[rank];
  const shares = sorted.map(({ fit: f }, i) => (counts[i] ? Math.exp((least - f[rank]) / 2) : 0)), all = shares.reduce((a, b) => a + b, 0);
  const models = sorted.map(({ order, fit: f, setAside }, i): GridRow => ({
    label: f.label, fit: f, ...order, aic: f.aic, aicc: f.aicc, bic: f.bic, logLikelihood: f.logLikelihood, k: f.k, n: f.n,
    difference: f[rank] - least, weight: shares[i] / all, rank: 1 + sorted.filter((s, j) => counts[j] && s.fit[rank] < f[rank]).length,
    tied: counts[i] && f[rank] - least <= 2, setAside, cautions: f.notes.filter((note) => note.tone === "caution").map((note) => note.text),
  }));
  const best = models[first] ?? null;
  return { models, best, rankedBy: rank, failures, asked, tried, complete: tried === asked, ...words(models, best, failures, rank, asked, tried) };
}

/** Root modulus of the plain moving-average factor below which it stands on the unit circle. */
const ON_CIRCLE = 1.001;

/** The criteria rest on a maximum inside the parameters' region (Akaike 1974; Hurvich & Tsai 1989). Where autoregressive and
 *  moving-average lags stand side by side, the likelihood often has its highest point on the region's edge: a moving-average
 *  root on the unit circle, where estimates pile up (Sargan & Bhargava 1983), takes out a cycle that is there by chance.
 *  Common practice is not to choose such a model. */
function whyAside(fit: Fit): string | null {
  if (!fit.converged) return "the search for its maximum did not converge";
  const mixed = fit.phi.some((c) => c !== 0) && fit.theta.some((c) => c !== 0);
  if (mixed && roots(fit.theta).some((root) => root.modulus < ON_CIRCLE)) return "its moving-average root lies on the unit circle beside autoregressive lags, where the criterion is not comparable";
  return null;
}

function words(models: readonly GridRow[], best: GridRow | null, failures: readonly GridFailure[], rank: string, asked: number, tried: number): { readonly sentence: string; readonly notes: readonly string[] } {
  const name = rank.toUpperCase().replace("AICC", "AICc"), notes: string[] = [];
  if (tried < asked) notes.push(`Stopped early: ${tried} of ${asked} orders were tried.`);
  if (failures.length > 0) notes.push(`${failures.length} of ${tried} orders could not be estimated or were set aside; the reasons are listed.`);
  if (models.length > 1) notes.push(`${models.length} models were tried: the best of many looks better than it is, so check it on data that were not used to choose it.`);
  if (best === null) return { sentence: `None of ${tried} orders could be estimated.`, notes };
  const aside = models.filter((m) => m.setAside !== null);
  if (aside.length > 0) notes.push(`${aside.length === models.length ? "All models have" : `${aside.length} of ${models.length} models ${aside.length === 1 ? "has" : "have"}`} a maximum that the criterion cannot rank, and ${aside.length === 1 ? "is" : "are"} set aside. Of ${aside[0].label}: ${aside[0].setAside}.`);
  const ties = models.filter((m) => m.tied && m !== best), simplest = [best, ...ties].reduce((a, b) => (b.k < a.k ? b : a));
  const also = ties.length === 0 ? "no other comes within 2 of it" : `${ties.slice(0, 4).map((m) => m.label).join(", ")}${ties.length > 4 ? ` and ${ties.length - 4} more` : ""} ${ties.length === 1 ? "is" : "are"} within 2 of it, which is a tie${simplest === best ? "" : `; the simplest of them is ${simplest.label}`}`;
  const rankable = models.length - aside.length, counted = rankable > 0 && aside.length > 0 ? `${rankable} model${rankable === 1 ? "" : "s"} that can be ranked` : `${models.length} model${models.length === 1 ? "" : "s"}`;
  if (best.cautions.length > 0) notes.push(`The best has a caution: ${best.cautions[0]}`);
  return { sentence: `Of ${counted}, ${best.label} has the smallest ${name} (${best.fit[rank as "aic"].toFixed(1)}); ${also}.`, notes };
}

/** An order in words: "ar 1, ma 2, season ar 0, ma 1". */
export function orderText({ ar, ma, seasonalAr, seasonalMa }: Order): string {
  const text = (lags: Lags): string => (typeof lags === "number" ? String(lags) : `[${lags.join(", ")}]`);
  const seasonal = text(seasonalAr) === "0" && text(seasonalMa) === "0" ? "" : `, season ar ${text(seasonalAr)}, ma ${text(seasonalMa)}`;
  return `ar ${text(ar)}, ma ${text(ma)}${seasonal}`;
}
