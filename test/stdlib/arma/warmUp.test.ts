import { describe, expect, it } from "vitest";
import { warmUp } from "../../../stdlib/arma/warmUp.ts";

describe("warmUp", () => {
  it("works in slices of one fit, so that a worker can answer in between", () => {
    let slices = 0, longest = 0, began = performance.now();
    for (const work = warmUp(); !work.next().done;) {
      slices++;
      // The first round meets cold code; what is promised is that no slice is more than a small fit.
      if (slices > 4) longest = Math.max(longest, performance.now() - began);
      began = performance.now();
    }
    expect(slices).toBe(12);
    expect(longest).toBeLessThan(1000);
  });
});
