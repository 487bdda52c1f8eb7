import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import { dense, fromDense } from "../../../runtime/desk/dense.ts";

describe("dense", () => {
  it("reads back the very bytes, however many there are", () => {
    fc.assert(fc.property(fc.uint8Array({ maxLength: 400 }), (bytes) => { expect([...fromDense(dense(bytes))]).toEqual([...bytes]); }), { seed: 20261201, numRuns: 500 });
    for (let n = 0; n < 40; n++) for (const fill of [0, 255]) expect([...fromDense(dense(new Uint8Array(n).fill(fill)))]).toEqual(Array.from({ length: n }, () => fill));
  });

  it("takes at most 1.24 signs a byte, none of which ends a script or needs escaping in JSON", () => {
    const bytes = Uint8Array.from({ length: 65_536 }, (_, i) => (i * 40_503) >> 5 & 255);
    const text = dense(bytes);
    expect(text.length).toBeLessThan(1.24 * bytes.length);
    expect(text).toMatch(/^[!-~]*$/);
    expect(text).not.toContain("<");
    expect(JSON.stringify(text).length).toBe(text.length + 2);
  });
});
