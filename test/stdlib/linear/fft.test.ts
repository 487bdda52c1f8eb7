import { describe, expect, it } from "vitest";
import { fourier } from "../../../stdlib/linear/fft.ts";
import { normals, seeded } from "../../../stdlib/forecast/random.ts";

/** The sum as it is written. */
function slowly(x: Float64Array): { re: Float64Array; im: Float64Array } {
  const n = x.length, re = new Float64Array(n), im = new Float64Array(n);
  for (let j = 0; j < n; j++) for (let t = 0; t < n; t++) {
    const angle = (-2 * Math.PI * ((j * t) % n)) / n;
    re[j] += x[t] * Math.cos(angle);
    im[j] += x[t] * Math.sin(angle);
  }
  return { re, im };
}

describe("fourier", () => {
  it.each([1, 2, 3, 4, 5, 7, 8, 12, 31, 64, 100, 131, 455])("of %i values is the sum as it is written", (n) => {
    const draw = normals(seeded(n)), x = Float64Array.from({ length: n }, draw), a = fourier(x), b = slowly(x);
    for (let j = 0; j < n; j++) {
      expect(Math.abs(a.re[j] - b.re[j])).toBeLessThan(1e-11 * n);
      expect(Math.abs(a.im[j] - b.im[j])).toBeLessThan(1e-11 * n);
    }
  });
  it("keeps the sum of squares (Parseval)", () => {
    const draw = normals(seeded(8)), x = Float64Array.from({ length: 1000 }, draw), { re, im } = fourier(x);
    const total = re.reduce((s, v, j) => s + v * v + im[j] * im[j], 0) / 1000;
    expect(total / x.reduce((s, v) => s + v * v, 0)).toBeCloseTo(1, 12);
  });
});
