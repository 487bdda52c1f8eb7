// Runs the kernels a few times, so that the first fit a reader waits for meets compiled code.

import { makeSeries } from "../series/series.ts";
import { fit } from "./fit.ts";
import { simulate } from "./simulate.ts";

/** Fits a few small simulated series: a plain model, a seasonal one, one with a gap. Takes some tens of milliseconds, once; meant
 *  for the moment when a worker starts and nobody waits yet. */
export function warmUp(): void {
  const plain = simulate({ phi: [0.6], theta: [0.3], mean: 5 }, 120, 1);
  const seasonal = simulate({ theta: [-0.4], seasonalTheta: [-0.5], seasonLength: 12 }, 120, 2);
  const gappy = makeSeries({ name: "", values: plain.values.map((v, t) => (t === 50 ? NaN : v)) });
  for (let round = 0; round < 3; round++) {
    fit({ series: plain, ar: 2, ma: 1 });
    fit({ series: plain, ar: 1 });
    fit({ series: seasonal, ma: 1, season: { length: 12, ma: 1 }, mean: false });
    fit({ series: gappy, ar: 1 });
  }
}
