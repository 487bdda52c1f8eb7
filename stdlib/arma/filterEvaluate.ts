// The likelihood by the filter, for series with many gaps: the same value as likelihood.ts, gradient by differences.

import { choleskyInto, choleskySolveInto } from "../linear/cholesky.ts";
import type { Evaluate } from "./search.ts";
import { filterLevels } from "./filter.ts";
import { levelModel } from "./levelModel.ts";
import type { Work } from "./work.ts";
import { differencedBy } from "./prepare.ts";
import { bridge, type Numbers } from "./numbers.ts";
import { expandInto } from "./shape.ts";

/** Fills the same fields of `work` as `valueAt` does, as far as the search and the report read them. */
export function filterEvaluate(numbers: Numbers, work: Work): Evaluate {
  const { prepared, levels, levelColumns, data } = numbers;
  const { shape, delta } = prepared;
  const m = levelColumns.length;
  const at = (x: Float64Array): number => {
    work.f = Infinity;
    const model = levelModel(shape, x, delta);
    if (model === null) return Infinity;
    expandInto(work.a, shape.ar, x, 0);
    expandInto(work.b, shape.ma, x, shape.ar.plain.length + shape.ar.seasonal.length);
    const filtered = filterLevels(model, [levels, ...levelColumns]);
    const q = new Float64Array(m * m), beta = new Float64Array(m);
    let squares = 0;
    const length = levels.length;
    for (let t = 0; t < length; t++) {
      const f = filtered.f[t];
      if (Number.isNaN(f)) continue;
      for (let i = 0; i < m; i++) {
        const vi = filtered.v[i + 1][t] / f;
        for (let j = 0; j <= i; j++) q[i * m + j] += vi * filtered.v[j + 1][t];
        beta[i] += vi * filtered.v[0][t];
      }
    }
    for (let i = 0; i < m; i++) for (let j = 0; j < i; j++) q[j * m + i] = q[i * m + j];
    work.q.set(q);
    work.chol.set(q);
    if (choleskyInto(work.chol, m) >= 0) return Infinity;
    choleskySolveInto(work.chol, m, beta);
    work.beta.set(beta);
    work.er.fill(0);
    for (let j = 0; j < m; j++) work.columnE[j].fill(0);
    for (let t = delta.length; t < length; t++) {
      const f = filtered.f[t];
      if (Number.isNaN(f)) continue;
      let v = filtered.v[0][t];
      for (let j = 0; j < m; j++) v -= beta[j] * filtered.v[j + 1][t];
      squares += v * v / f;
      const by = 1 / Math.sqrt(f);
      work.er[t - delta.length] = v * by;
      for (let j = 0; j < m; j++) work.columnE[j][t - delta.length] = filtered.v[j + 1][t] * by;
    }
    // The gaps need no integrating out here: what was not observed is not in the product.
    const free = data.sigma2 === null, integrated = (data.integrated ?? data.gaps) - data.gaps, ne = filtered.count - integrated;
    let columnDet = 0;
    for (let i = 0; i < integrated; i++) columnDet += 2 * Math.log(work.chol[i * m + i]);
    work.sum = squares;
    work.nEffective = ne;
    work.logDet = filtered.logDet + columnDet;
    work.sigma2 = free ? squares / ne : data.sigma2!;
    work.f = 0.5 * (ne * Math.log(2 * Math.PI * work.sigma2) + work.logDet + (free ? ne : squares / work.sigma2));
    if (Number.isNaN(work.f)) work.f = Infinity;
    return work.f;
  };
  return {
    value(x) {
      const f = at(x);
      if (Number.isFinite(f)) {
        const r = Float64Array.from(levels);
        for (let j = 0; j < m; j++) { const c = work.beta[j], column = levelColumns[j]; for (let t = 0; t < r.length; t++) r[t] -= c * column[t]; }
        work.r = differencedBy(delta, bridge(r));
        work.rKnown = true;
      }
      return f;
    },
    // One-sided: the bias of half a step (5e-7) moves the maximum by as much, which costs n * 1e-13 in likelihood; differences
    // of two such gradients, for the information, lose the bias altogether.
    gradientInto(x, gradient) {
      const point = Float64Array.from(x), here = work.f, beta = Float64Array.from(work.beta), sum = work.sum, sigma2 = work.sigma2, logDet = work.logDet;
      for (let i = 0; i < x.length; i++) {
        gradient[i] = NaN;
        for (let h = 1e-6; Math.abs(h) > 1e-10 && !Number.isFinite(gradient[i]); h = h > 0 ? -h : -h / 10) {
          point[i] = x[i] + h;
          gradient[i] = (at(point) - here) / h;
        }
        point[i] = x[i];
      }
      work.beta.set(beta);
      work.f = here; work.sum = sum; work.sigma2 = sigma2; work.logDet = logDet;
    },
  };
}
