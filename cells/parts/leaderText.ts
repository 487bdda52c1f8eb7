// How a series that leads another is put into a fit, as text to copy.

import { offsetBetween, type Series } from "../../stdlib/index.ts";

/** A sentence with the options of a fit of `series` that take what `leader` was `lag` periods earlier.
 *  @param source  how the leader is written in the notebook   @param lag  0 or more */
export function leaderText(series: Series, leader: Series, source: string, lag: number): string {
  const earlier = (what: string): string => (lag === 0 ? what : `lagged(${what}, ${lag})`);
  if (leader.steps.some(step => step.step === "difference")) {
    return `A fit could try it as a regressor, as ${earlier("…")} of the series from before the differences: a fit takes its regressors in levels and differences them as it does its own series.`;
  }
  // A regressor must be known from the first level that the fit sees; differences put the series' own first value later than that.
  const levels = series.steps.find(step => step.step === "difference")?.before ?? series;
  const first = Math.max(0, offsetBetween(levels, leader) + lag);
  const window = first === 0 || first >= series.n ? "" : `, window: {from: "${series.times[first]}"}`;
  return `A fit could try it: regressors: {leader: ${earlier(source)}}${window}`;
}
