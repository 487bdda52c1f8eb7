// Conclusions that must still hold.

import type { ClaimOutcome, Kind } from "./kind.ts";

export type ClaimOutcomes = Readonly<Record<string, ClaimOutcome>>;

export const claims: Kind<ClaimOutcomes, ClaimOutcomes> = {
  name: "claims",
  sentence: "Conclusions that must still hold: each line is \"claim in words\": condition.",
  options: {},
  body: "claims",
  example: "\"The residuals pass at lag 24\": checks.ljungBox.p > 0.05",
  run: (given) => given,
  value: (result) => Object.fromEntries(Object.entries(result).map(([claim, { holds }]) => [claim, holds])),
  show: (result) => [{ part: "claims", claims: Object.entries(result).map(([claim, outcome]) => ({ claim, ...outcome })) }],
};
