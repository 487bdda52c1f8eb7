// The order of a model in the usual short form.

import type { FitOptions, Lags } from "./model.ts";
import { defaultSeasonLength } from "../series/every.ts";

/** "(2,1,1)(0,1,1)12": autoregressive lags, differences, moving-average lags; the same for the season, its length last.
 *  Lag lists stand in brackets: "([1 12],0,0)". Differences are the series' trailing ones; those at the season's length (or any
 *  lag above 1 where the model has no season) count as seasonal. */
export function modelName(options: FitOptions): string {
  const steps = options.series.steps;
  const lags: number[] = [];
  for (let i = steps.length - 1; i >= 0; i--) { const s = steps[i]; if (s.step !== "difference") break; lags.push(s.lag); }
  const plain = lags.filter(l => l === 1).length;
  const seasonal = lags.filter(l => l > 1);
  const { season } = options;
  const has = (l: Lags | undefined) => l !== undefined && (typeof l === "number" ? l > 0 : l.length > 0);
  const head = `(${orders(options.ar)},${plain},${orders(options.ma)})`;
  if (!has(season?.ar) && !has(season?.ma) && seasonal.length === 0) return head;
  const length = season?.length ?? (seasonal.length > 0 ? Math.max(...seasonal) : defaultSeasonLength(options.series.every) ?? 0);
  return `${head}(${orders(season?.ar)},${seasonal.length},${orders(season?.ma)})${length}`;
}

function orders(lags: Lags | undefined): string {
  if (lags === undefined) return "0";
  if (typeof lags === "number") return String(lags);
  const sorted = [...lags].sort((a, b) => a - b);
  return sorted.every((l, i) => l === i + 1) ? String(sorted.length) : `[${sorted.join(" ")}]`;
}
