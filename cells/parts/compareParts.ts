// What a comparison shows: the finding, then how a grid's orders or the models' errors stand to each other.

import type { Evaluation, Grid, Stepwise } from "../../stdlib/index.ts";
import { evaluationParts } from "./evaluationParts.ts";
import { gridParts } from "./gridParts.ts";
import type { Part } from "./part.ts";

/** A grid's result, or an evaluation's; `scores` and `against` are empty for a grid. */
export type Comparison =
  | ((Grid | Stepwise) & { readonly how: "criterion"; readonly scores: readonly never[]; readonly against: readonly never[] })
  | (Evaluation & { readonly how: "origins"; readonly every: string | null });

export function compareParts(result: Comparison): readonly Part[] {
  return result.how === "criterion" ? gridParts(result) : evaluationParts(result, result.every);
}
