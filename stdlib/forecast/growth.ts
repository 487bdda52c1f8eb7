// Growth on the year before, by period.

import type { Series } from "../series/series.ts";
import type { Growth } from "./model.ts";
import { quantileOf, type Outlook } from "./outlook.ts";
import { drawsOf, type Paths } from "./paths.ts";
import { wholeYearOf } from "./totals.ts";

/** Growth of each period on the same one a year before, as a share. While the year before was observed its limits are those
 *  of the forecast; after that both ends are forecasts, and the limits come
 *  from the ratio's own distribution (logs) or from the paths.
 *  Empty where a year has no fixed number of periods; periods whose year before is missing or not above 0 are left out. */
export function growthOf(base: Series, outlook: Outlook, times: readonly string[], levels: readonly number[], paths: () => Paths): Growth[] {
  const lag = wholeYearOf(base.every);
  if (lag === null) return [];
  const quantiles = new Map<number, Float64Array>();
  const at = (p: number, h: number): number => {
    const known = quantiles.get(p) ?? outlook.quantile(p);
    quantiles.set(p, known);
    return known[h];
  };
  const rows: Growth[] = [];
  for (let h = 0; h < outlook.horizon; h++) {
    const t = base.n + h - lag, row = (q: (p: number) => number): Growth =>
      ({ time: times[h], median: q(0.5), bands: levels.map((level) => ({ level, low: q((1 - level) / 2), high: q((1 + level) / 2) })) });
    if (h < lag) {
      const before = t >= 0 ? base.values[t] : NaN;
      if (before > 0) rows.push(row((p) => at(p, h) / before - 1));
      continue;
    }
    const { ratio } = outlook;
    if (ratio) { rows.push(row((p) => ratio(h, h - lag, p) - 1)); continue; }
    const now = drawsOf(paths(), h), before = drawsOf(paths(), h - lag);
    if (before.some((x) => !(x > 0))) continue;
    const ratios = now.map((x, i) => x / before[i] - 1).sort();
    rows.push(row((p) => quantileOf(ratios, p)));
  }
  return rows;
}
