// Transform steps: what can be done to a series before a model sees it, and how a forecast comes back.

import type { Series } from "./series.ts";

/** A step as an author writes it. Plain data. */
export type Step =
  | { readonly step: "log" }
  | { readonly step: "boxCox"; readonly lambda: number }
  | { readonly step: "difference"; readonly lag: number }
  | { readonly step: "scale"; readonly factor: number; readonly unit?: string }
  | { readonly step: "perDay" }
  | { readonly step: "detrend"; readonly degree: number }
  | { readonly step: "seasonallyAdjust"; readonly length?: number }
  | { readonly step: "fill"; readonly how: "linear" | "previous" | "model" }
  | { readonly step: "aggregate"; readonly to: string; readonly how: "sum" | "mean" | "last" };

/** A step that was applied, with the series as it stood before it: all that undoing needs. */
export type AppliedStep = Step & { readonly before: Series };
