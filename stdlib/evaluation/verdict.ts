// What a comparison says, in the sentences an analyst would write.

import type { Against, RankBy, RankedModel } from "./rollingOrigins.ts";

interface Frame {
  readonly rank: RankBy; readonly origins: number; readonly horizon: number;
  readonly complete: boolean; readonly total: number; readonly failures: number;
}

/** The finding in a sentence or two, and what has to be said beside it. */
export function rankSentences(models: readonly RankedModel[], against: readonly Against[], frame: Frame): { readonly sentence: string; readonly notes: readonly string[] } {
  const { rank, origins, horizon, complete, total, failures } = frame, name = rank.toUpperCase();
  const [best, next] = models, notes: string[] = [];
  const over = `over ${origins} origin${origins === 1 ? "" : "s"} and ${horizon === 1 ? "one step" : `1 to ${horizon} steps`} ahead`;
  const tied = models.filter((m) => m.rank === 1);
  let sentence = models.length === 1 ? `The ${name} of ${best.label} was ${figure(best[rank])} ${over}.` : tied.length > 1
    ? `${tied.map((m) => m.label).join(" and ")} tie: the same ${name} of ${figure(best[rank])} ${over}.`
    : `${best.label} had the smallest ${name}, ${figure(best[rank])}, ${over}.`;
  if (next && tied.length === 1) sentence += ` ${nextSentence(best, next, rank, against)}`;
  sentence += ` ${best.sentence}`;
  if (!complete) notes.push(`Stopped early: scored on the first ${origins} of ${total} origins, which every model had finished.`);
  if (failures > 0) notes.push(`${failures} forecast${failures === 1 ? "" : "s"} could not be made; the reasons are listed. A model that misses some ranks behind those that made all, since it was spared what they had to forecast.`);
  if (horizon > 1) notes.push("Forecasts from neighbouring origins overlap, so that coverage strays more by chance than the binomial range for independent tries says.");
  notes.push("Bias, RMSE and RMSSE judge the mean forecast; MAE, MAPE, sMAPE and MASE the median, which makes absolute errors smallest.");
  return { sentence, notes };
}

function nextSentence(best: RankedModel, next: RankedModel, rank: RankBy, against: readonly Against[]): string {
  const row = against.find((r) => r.horizon === "all" && ((r.a === best.label && r.b === next.label) || (r.a === next.label && r.b === best.label)));
  const second = `next was ${next.label} (${figure(next[rank])})`;
  if (!row) return `The ${second}.`;
  if (Number.isNaN(row.p)) return `The ${second}; no test between them: ${row.note ?? "not available"}.`;
  return row.p < 0.05 ? `The ${second}, worse by more than chance (p ${printed(row.p)}).` : `The ${second}; the difference may be chance (p ${printed(row.p)}).`;
}

const figure = (x: number): string => (Number.isNaN(x) ? "not available" : String(+x.toPrecision(3)));
const printed = (p: number): string => (p < 0.001 ? "< 0.001" : `= ${p.toFixed(p < 0.1 ? 3 : 2)}`);
