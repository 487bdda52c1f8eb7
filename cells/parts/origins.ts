// How far and how often to look ahead at held-out origins, where the author did not say.

import { defaultSeasonLength } from "../../stdlib/index.ts";

/** A season, at most 12 periods, and at most an eighth of the data; 4 where there is no season. */
export function usualHorizon(every: string | null, n: number): number {
  const season = defaultSeasonLength(every) ?? 4;
  return Math.max(1, Math.min(season < 2 ? 4 : season, 12, Math.floor(n / 8)));
}

/** A quarter of the data, from 8 to 36 origins where the data allow it. */
export function usualOrigins(n: number, horizon: number): number {
  const room = n - horizon - Math.max(10, Math.floor(n / 2));
  return Math.max(1, Math.min(36, Math.max(8, Math.floor(n / 4)), room));
}
