import { expect, it } from "vitest";
import { gaussNewtonInto } from "../../../stdlib/arma/gaussNewton.ts";
import { gradientInto } from "../../../stdlib/arma/gradient.ts";
import { valueAt } from "../../../stdlib/arma/likelihood.ts";
import { makeShape } from "../../../stdlib/arma/shape.ts";
import { simulate } from "../../../stdlib/arma/simulate.ts";
import { makeWork, type Data, type Work } from "../../../stdlib/arma/work.ts";

const y = simulate({ phi: [1.2, -0.45], theta: [0.5] }, 200, 2).values;
const data: Data = { n: 200, y, columns: [new Float64Array(200).fill(1)], gaps: 0, constant: true, sigma2: null };
const large = makeShape([1, 2, 3], [], [1, 2, 3], [], 1), small = makeShape([1, 2], [], [1], [], 1);

/** Value, gradient and curvature at a point. */
function told(work: Work, x: readonly number[]): readonly number[] {
  const at = Float64Array.from(x), k = at.length, gradient = new Float64Array(k), curvature = new Float64Array(k * k);
  const value = valueAt(work, data, at);
  gradientInto(work, data, at, gradient);
  gaussNewtonInto(curvature, work, data, at, Int32Array.from(at.keys()));
  return [value, ...gradient, ...curvature];
}

it("a smaller shape in a larger one's place is told the same, to the bit, and so is the larger one after it", () => {
  const own = makeWork(large, data), far = [0.4, -0.2, 0.1, 0.9, 0.3, -0.2], near = [1.1, -0.4, 0.4];
  const first = told(own, far), guest = makeWork(small, data, own);
  expect(guest.block).toBe(own.block);
  expect(told(guest, near)).toEqual(told(makeWork(small, data), near));
  expect(told(own, far)).toEqual(first);
});

it("a shape that needs more place than it could borrow has its own", () => {
  const lender = makeWork(small, data), guest = makeWork(large, data, lender);
  expect(guest.block).not.toBe(lender.block);
});
