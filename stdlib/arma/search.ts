// What a search for the maximum is given, and what it finds.

import type { Data, Work } from "./work.ts";
import type { Shape } from "./shape.ts";
import type { Smaller } from "./smaller.ts";

export interface Estimate {
  /** phi, Phi, theta, Theta. */
  readonly x: Float64Array;
  /** Negative log-likelihood. */
  readonly value: number;
  readonly converged: boolean;
  /** Likelihood passes over all starts. */
  readonly passes: number;
  /** Second-derivative matrix of the search, by free coefficient: rough. */
  readonly hessian: Float64Array;
  /** Positions of the free coefficients in x. */
  readonly free: Int32Array;
}

export interface Search {
  readonly shape: Shape;
  readonly data: Data;
  /** NaN where a coefficient is free. */
  readonly held: Float64Array;
  /** Series without gaps for starting regressions (gaps bridged), mean corrected. */
  readonly bridged: Float64Array;
  /** Coefficients to start from instead of a regression, when they are known to be near. */
  readonly near?: Float64Array;
  /** Maxima of smaller models that are known already. */
  readonly smaller?: Smaller;
  readonly work?: Work;
  readonly evaluate?: Evaluate;
  /** "one": the first start only. */
  readonly starts?: "one";
}

/** Value and gradient of another likelihood (of the filter, where there are many gaps). */
export interface Evaluate {
  value(x: Float64Array): number;
  gradientInto(x: Float64Array, gradient: Float64Array): void;
}
