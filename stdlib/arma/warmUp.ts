// Runs the kernels a few times, so that the first fit a reader waits for meets compiled code.

import { makeSeries } from "../series/series.ts";
import { fit } from "./fit.ts";
import { simulate } from "./simulate.ts";

/** Fits a few small simulated series: a plain model, a seasonal one, one with a gap. Meant for a worker that has just started:
 *  some tens of milliseconds in all, in slices of one fit, so that whoever already waits is served in between.
 *  @example const slices = warmUp(); const next = () => { if (!slices.next().done) setTimeout(next); }; next(); */
export function* warmUp(): Generator<void, void> {
  const plain = simulate({ phi: [0.6], theta: [0.3], mean: 5 }, 120, 1);
  const seasonal = simulate({ theta: [-0.4], seasonalTheta: [-0.5], seasonLength: 12 }, 120, 2);
  const gappy = makeSeries({ name: "", values: plain.values.map((v, t) => (t === 50 ? NaN : v)) });
  for (let round = 0; round < 3; round++) {
    for (const options of [{ series: plain, ar: 2, ma: 1 }, { series: plain, ar: 1 }, { series: seasonal, ma: 1, season: { length: 12, ma: 1 }, mean: false }, { series: gappy, ar: 1 }]) {
      fit(options);
      yield;
    }
  }
}
