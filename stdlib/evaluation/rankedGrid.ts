// Fits ranked by an information criterion: rows, weights, ties, words.

import type { Fit, Lags } from "../arma/model.ts";

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

/** Ranks fits, smallest criterion first. */
export function ranked(fits: readonly { readonly order: Order; readonly fit: Fit }[], failures: readonly GridFailure[], rank: Criterion, asked: number, tried: number): Grid {
  const sorted = [...fits].sort((a, b) => a.fit[rank] - b.fit[rank]), least = sorted.length > 0 ? sorted[0].fit[rank] : NaN;
  const shares = sorted.map(({ fit: f }) => Math.exp((least - f[rank]) / 2)), all = shares.reduce((a, b) => a + b, 0);
  const models = sorted.map(({ order, fit: f }, i): GridRow => ({
    label: f.label, fit: f, ...order, aic: f.aic, aicc: f.aicc, bic: f.bic, logLikelihood: f.logLikelihood, k: f.k, n: f.n,
    difference: f[rank] - least, weight: shares[i] / all, rank: 1 + sorted.filter((s) => s.fit[rank] < f[rank]).length, tied: f[rank] - least <= 2,
    cautions: f.notes.filter((note) => note.tone === "caution").map((note) => note.text),
  }));
  return { models, best: models[0] ?? null, rankedBy: rank, failures, asked, tried, complete: tried === asked, ...words(models, failures, rank, asked, tried) };
}

function words(models: readonly GridRow[], failures: readonly GridFailure[], rank: string, asked: number, tried: number): { readonly sentence: string; readonly notes: readonly string[] } {
  const name = rank.toUpperCase().replace("AICC", "AICc"), notes: string[] = [];
  if (tried < asked) notes.push(`Stopped early: ${tried} of ${asked} orders were tried.`);
  if (failures.length > 0) notes.push(`${failures.length} of ${tried} orders could not be estimated or were set aside; the reasons are listed.`);
  if (models.length > 1) notes.push(`${models.length} models were tried: the best of many looks better than it is, so check it on data that were not used to choose it.`);
  const [best] = models;
  if (!best) return { sentence: `None of ${tried} orders could be estimated.`, notes };
  const ties = models.filter((m) => m.tied && m !== best);
  const also = ties.length === 0 ? "no other comes within 2 of it" : `${ties.slice(0, 4).map((m) => m.label).join(", ")}${ties.length > 4 ? ` and ${ties.length - 4} more` : ""} ${ties.length === 1 ? "is" : "are"} within 2 of it, which is a tie`;
  if (best.cautions.length > 0) notes.push(`The best has a caution: ${best.cautions[0]}`);
  return { sentence: `Of ${models.length} model${models.length === 1 ? "" : "s"}, ${best.label} has the smallest ${name} (${best.fit[rank as "aic"].toFixed(1)}); ${also}.`, notes };
}

/** An order in words: "ar 1, ma 2, season ar 0, ma 1". */
export function orderText({ ar, ma, seasonalAr, seasonalMa }: Order): string {
  const text = (lags: Lags): string => (typeof lags === "number" ? String(lags) : `[${lags.join(", ")}]`);
  const seasonal = text(seasonalAr) === "0" && text(seasonalMa) === "0" ? "" : `, season ar ${text(seasonalAr)}, ma ${text(seasonalMa)}`;
  return `ar ${text(ar)}, ma ${text(ma)}${seasonal}`;
}
