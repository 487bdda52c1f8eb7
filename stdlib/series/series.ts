// A regularly spaced series of numbers: the one value that every method here takes or returns.

import type { AppliedStep } from "./steps.ts";

/** One observation a period, in time order. `NaN` in `values` is missing data and nothing else. */
export interface Series {
  readonly name: string;
  /** Unit of the values as a reader should see it ("vehicles"); "" when not known. */
  readonly unit: string;
  /** Spacing as an ISO 8601 duration ("P1M", "P3M", "P1W", "P1D", "PT1H", "P1Y"); null when the series is only numbered 1, 2, 3. */
  readonly every: string | null;
  /** ISO 8601 text of the first period ("2019-03", "2019-Q1", "2019-W07", "2019-03-05"); "1" when only numbered. */
  readonly start: string;
  readonly n: number;
  readonly values: Float64Array;
  /** Length n, ISO 8601 texts in the same form as `start`. */
  readonly times: readonly string[];
  /** The steps that led here, first one first; each remembers the series that it was given. */
  readonly steps: readonly AppliedStep[];
}
