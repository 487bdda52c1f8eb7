// Simulated series from a model, with a seed.

import { makeSeries, type Series } from "../series/series.ts";
import { normals, seeded } from "../forecast/random.ts";
import { expandedPolynomials, type ArmaModel } from "./coefficients.ts";
import type { Fit } from "./model.ts";
import { levelModel } from "./levelModel.ts";
import { makeShape } from "./shape.ts";

/** n values of the process (for a fit: of the differenced series it models), started in its stationary distribution, so that
 *  the first value is as typical as the last. The same seed gives the same series everywhere.
 *  @throws RangeError where the model is not stationary */
export function simulate(model: Fit | ArmaModel, n: number, seed = 1): Series {
  if (!Number.isInteger(n) || n < 1) throw new RangeError(`simulate: n is ${String(n)}, expected a whole number from 1 on`);
  const { phi, theta } = expandedPolynomials(model);
  const lags = (c: Float64Array) => [...c.keys()].filter(i => c[i] !== 0).map(i => i + 1);
  const shape = makeShape(lags(phi), [], lags(theta), [], 1);
  const x = Float64Array.from([...Array.from(shape.ar.lags, l => phi[l - 1]), ...Array.from(shape.ma.lags, l => theta[l - 1])]);
  const made = levelModel(shape, x, new Float64Array(0));
  if (made === null) throw new RangeError("simulate: the autoregressive side is not stationary (a root lies on or inside the unit circle)");
  const draw = normals(seeded(seed));
  const sigma = Math.sqrt(model.sigma2 ?? 1), mean = model.mean ?? 0;
  const u = startDraw(made.omega, made.g, draw);
  const e = Float64Array.from({ length: n }, () => draw());
  const w = new Float64Array(n);
  for (let t = 0; t < n; t++) {
    let sum = e[t] + (t < u.length ? u[t] : 0);
    for (const lag of shape.ar.lags) if (lag <= t) sum += phi[lag - 1] * w[t - lag];
    for (const lag of shape.ma.lags) if (lag <= t) sum += theta[lag - 1] * e[t - lag];
    w[t] = sum;
  }
  const fit = "series" in model ? model : null;
  return makeSeries({
    name: fit ? `${fit.series.name || "series"} (simulated)` : "simulated", unit: fit?.series.unit ?? "",
    every: fit?.series.every ?? null, start: fit?.series.start ?? "1", values: w.map(v => mean + sigma * v),
  });
}

/** A draw of the pre-sample's part: L z with L the (semidefinite) factor of its covariance. */
function startDraw(omega: Float64Array, g: number, draw: () => number): Float64Array {
  const l = new Float64Array(g * g), u = new Float64Array(g), z = Float64Array.from({ length: g }, () => draw());
  for (let i = 0; i < g; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = omega[j * g + i];
      for (let k = 0; k < j; k++) sum -= l[i * g + k] * l[j * g + k];
      if (i === j) l[i * g + i] = sum > 1e-13 * omega[i * g + i] ? Math.sqrt(sum) : 0;
      else l[i * g + j] = l[j * g + j] > 0 ? sum / l[j * g + j] : 0;
      u[i] += l[i * g + j] * z[j];
    }
  }
  return u;
}
