import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import { shortPath } from "../../../runtime/page/shortPath.ts";

/** Every end of a line or curve of a path, absolute: reads what `shortPath` prints and the plain absolute form alike. */
function ends(d: string): [number, number][] {
  const width: Record<string, number> = { m: 2, l: 2, h: 1, v: 1, c: 6, a: 7, z: 0 };
  const found: [number, number][] = [];
  let at: [number, number] = [0, 0], start = at;
  for (const [, letter, rest] of d.matchAll(/([a-z])([^a-z]*)/gi)) {
    const kind = letter.toLowerCase(), own = kind === letter ? at : [0, 0];
    const numbers = (rest.match(/-?(?:\d+\.?\d*|\.\d+)/g) ?? []).map(Number);
    if (kind === "z") { at = start; continue; }
    for (let i = 0; i < numbers.length; i += width[kind]) {
      const [x, y] = numbers.slice(i, i + width[kind]).slice(-2);
      const from = kind === letter ? at : own;
      at = kind === "h" ? [from[0] + x, at[1]] : kind === "v" ? [at[0], from[1] + x] : [from[0] + x, from[1] + y];
      if (kind === "m" && i === 0) start = at;
      found.push(at);
    }
  }
  return found;
}

describe("shortPath", () => {
  it("prints steps in tenths of a pixel", () => {
    expect(shortPath("M0,0L10.04,20.06L10.04,5L0,5Z")).toBe("M0 0l10 20.1v-15.1h-10z");
    expect(shortPath("M-1.73,-1.73h3.46v3.46h-3.46Z", [100.5, 40])).toBe("M98.8 38.3h3.4v3.4h-3.4z");
    expect(shortPath("M1,0A1,1,0,1,1,-1,0A1,1,0,1,1,1,0", [5, 5])).toBe("M6 5a1 1 0 1 1-2 0 1 1 0 1 1 2 0");
    expect(shortPath("M0,0L1,1M0.25,3L1,4")).toBe("M0 0l1 1m-.7 2l.7 1");
  });

  it("keeps half circles half circles, wherever rounding puts their ends", () => {
    expect(shortPath("M1.73,0A1.73,1.73,0,1,1,-1.73,0A1.73,1.73,0,1,1,1.73,0", [0.02, 0])).toBe("M1.8 0a1.75 1.75 0 1 1-3.5 0 1.75 1.75 0 1 1 3.5 0");
    for (let i = 0; i < 50; i++) {
      const [, radius, , step] = /a([\d.]+) ([\d.]+) 0 1 1-([\d.]+) 0/.exec(shortPath("M1.73,0A1.73,1.73,0,1,1,-1.73,0A1.73,1.73,0,1,1,1.73,0", [i / 37, 2])) ?? [];
      expect(2 * Number(radius)).toBeCloseTo(Number(step), 10);
    }
  });

  it("ends every line within a twentieth of a pixel of where it ended, however long the path", () => {
    const pixel = fc.double({ min: -900, max: 900, noNaN: true }).map((value) => Math.round(value * 1000) / 1000);
    fc.assert(fc.property(fc.array(fc.tuple(pixel, pixel), { minLength: 2, maxLength: 300 }), fc.tuple(pixel, pixel), (points, by) => {
      const d = points.map(([x, y], i) => `${i === 0 ? "M" : "L"}${x},${y}`).join("");
      // A line of no length is not printed: what counts is where the pen is after each one that is.
      const printed = ends(shortPath(d, by));
      let next = 0;
      for (const [x, y] of points) {
        const near = ([px, py]: [number, number]): boolean => Math.abs(px - x - by[0]) <= 0.0501 && Math.abs(py - y - by[1]) <= 0.0501;
        if (next < printed.length && near(printed[next])) next += 1;
        else expect(near(printed[next - 1])).toBe(true);
      }
      expect(next).toBe(printed.length);
    }), { seed: 20261201 });
  });

  it("refuses what is no path", () => {
    expect(() => shortPath("M0,0X5")).toThrow("X is no path command");
  });
});
