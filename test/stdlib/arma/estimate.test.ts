import { describe, expect, it } from "vitest";
import { estimate } from "../../../stdlib/arma/estimate.ts";
import type { Data } from "../../../stdlib/arma/work.ts";
import { makeShape } from "../../../stdlib/arma/shape.ts";
import { simulate } from "../../../stdlib/arma/simulate.ts";
import { differenced, readCases, readValues, regressors, transformed } from "./cases.ts";

describe("estimate", () => {
  for (const c of readCases("arima_ml")) {
    it(`${c.id} reaches the best known maximum`, () => {
      const m = c.inputs.model, s = m.seasonal;
      const shape = makeShape(m.arLags, s?.arLags ?? [], m.maLags, s?.maLags ?? [], s?.period ?? 1);
      const levels = transformed(readValues(c.series!), c.transform);
      const columns: Float64Array[] = [];
      const filled = levels.map(v => Number.isNaN(v) ? 0 : v);
      for (let t = 0; t < levels.length; t++) {
        if (!Number.isNaN(levels[t])) continue;
        const pulse = new Float64Array(levels.length);
        pulse[t] = 1;
        columns.push(differenced(pulse, m));
        let a = t, b = t;
        while (a >= 0 && Number.isNaN(levels[a])) a--;
        while (b < levels.length && Number.isNaN(levels[b])) b++;
        filled[t] = a < 0 ? levels[b] : b >= levels.length ? levels[a] : levels[a] + (levels[b] - levels[a]) * (t - a) / (b - a);
      }
      const gaps = columns.length;
      const y = differenced(filled, m);
      if (m.constant) columns.push(new Float64Array(y.length).fill(1));
      for (const x of regressors(m, levels.length)) columns.push(differenced(x, m));
      const data: Data = { n: y.length, y, columns, gaps, sigma2: null };
      const mean = m.constant ? y.reduce((a, b) => a + b, 0) / y.length : 0;
      const found = estimate({ shape, data, held: new Float64Array(shape.count).fill(NaN), bridged: y.map(v => v - mean) });
      if (process.env.SHOW) console.log(c.id, found.passes, found.converged, -found.value - (c.expected.logLik as number), [...found.x].map(v => v.toFixed(4)).join(" "), JSON.stringify(c.expected.coef));
      expect(-found.value).toBeGreaterThan((c.expected.logLik as number) - 1e-6);
      expect(found.converged).toBe(true);
    });
  }
});

describe("a long series is searched on its last stretch first", () => {
  const shape = makeShape([1, 2], [], [1], [], 1), free = new Float64Array(3).fill(NaN);
  const dataOf = (y: Float64Array): Data => ({ n: y.length, y, columns: [new Float64Array(y.length).fill(1)], gaps: 0, constant: true, sigma2: null });
  const search = (y: Float64Array, near?: Float64Array) => estimate({ shape, data: dataOf(y), held: free, bridged: y, ...(near ? { near } : {}) });

  it("and then needs a few passes over the whole", () => {
    const found = search(simulate({ phi: [1.2, -0.45], theta: [0.5] }, 40_000, 2).values);
    expect(found.converged).toBe(true);
    expect(found.passes).toBeLessThanOrEqual(5);
  });

  it("and ends at the highest maximum of the whole even where the stretch is another process", () => {
    const y = Float64Array.from([...simulate({ phi: [1.2, -0.45], theta: [0.5] }, 17_000, 2).values, ...simulate({ phi: [-0.4, 0.2], theta: [-0.3] }, 3000, 3).values]);
    // The likelihood of the two together has maxima 566 apart.
    const others = [[1.2, -0.45, 0.5], [-0.4, 0.2, -0.3], [0, 0, 0], [1.5, -0.6, -0.2]].map(x => search(y, Float64Array.from(x)).value);
    expect(Math.max(...others) - Math.min(...others)).toBeGreaterThan(500);
    expect(search(y).value).toBeLessThan(Math.min(...others) + 1e-6);
  });
});

describe("a model with many ridges", () => {
  it("is not searched to the end of each: a start is left that leads to a place which is known, or could not rise as high", () => {
    const series = simulate({ phi: [1.2, -0.45], theta: [0.5], mean: 5 }, 200, 2).values, mean = series.reduce((a, b) => a + b, 0) / 200, y = series.map(v => v - mean);
    const data: Data = { n: 200, y, columns: [new Float64Array(200).fill(1)], gaps: 0, constant: true, sigma2: null };
    const lags = (count: number) => Array.from({ length: count }, (_, i) => i + 1);
    const found = [3, 4, 5].flatMap(p => [3, 4, 5].map(q => estimate({ shape: makeShape(lags(p), [], lags(q), [], 1), data, held: new Float64Array(p + q).fill(NaN), bridged: y })));
    // Followed to their ends they take 1,170 passes.
    expect(found.reduce((sum, one) => sum + one.passes, 0)).toBeLessThan(1000);
    expect(found.every(one => one.converged)).toBe(true);
  });
});
