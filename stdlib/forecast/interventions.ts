// Regressors that are known for every time: they extend into the forecast by themselves.

/** An intervention or calendar effect, as plain data; `values(start, every, n)` of `interventionColumns` computes its columns. */
export type Intervention =
  | { readonly intervention: "pulse"; readonly at: string }
  | { readonly intervention: "levelShift"; readonly at: string }
  | { readonly intervention: "ramp"; readonly from: string; readonly to: string }
  | { readonly intervention: "harmonics"; readonly length: number; readonly count: number }
  | { readonly intervention: "tradingDays" }
  | { readonly intervention: "easterEffect"; readonly days: number }
  | { readonly intervention: "temporaryChange"; readonly at: string; readonly decay: number };
