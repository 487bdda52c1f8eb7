import { describe, expect, test } from "vitest";
import { agrees, formatLike, patternFault } from "../../../runtime/text/live.ts";

describe("agrees", () => {
  test.each<[string, string | null, number | string | boolean, boolean | null]>([
    ["0.31", null, 0.314, true], ["0.31", null, 0.305, true], ["0.31", null, 0.315, true], ["0.31", null, 0.3151, false], ["0.31", null, 0.3049, false],
    ["-483.2", null, -483.16, true], ["−483.2", null, -483.16, true], ["483.2", null, -483.2, false], ["1,204", null, 1204.4, true], ["1,204", null, 1204.6, false], ["1204", null, 1204.4, true],
    ["12%", null, 0.124, true], ["12%", null, 0.126, false], ["12.0 %", null, 0.1204, true], ["<0.001", null, 0.0004, true], ["<0.001", null, 0.002, false], ["< 0.001", null, 1e-12, true], [">0.99", null, 0.999, true],
    ["1.2e-5", null, 1.24e-5, true], ["1.2e-5", null, 1.26e-5, false], ["+3", null, 3.2, true], ["0", null, -0.3, true], ["-0.0", null, 0.04, true], ["$1,204.50", null, 1204.504, true], ["3 months", null, 3, true], ["4 months", null, 3, false],
    ["airline", null, "airline", true], ["airline", null, "other", false], ["(2,1)", null, "(2,1)", true], ["yes", null, true, true], ["false", null, true, false], ["12", null, "12", true], ["words", null, 3, false],
    ["0.31", null, NaN, null], ["0.31", null, Infinity, null], ["1.2k", "~s", 1200, true], ["1.2k", "~s", 1300, false], ["12.3%", ".1%", 0.1231, true], ["−1,204", ",.0f", -1204.2, true], ["-1,204", ",.0f", -1204.2, true], ["0.31", ".2f", 0.315, true], ["0.3", "nonsense", 0.3, false],
    ["0.5", null, 0.55, true], ["0.15", null, 0.145, true], ["29.65", null, 29.655, true],
  ])("%s (%s) of %s: %s", (saved, pattern, value, expected) => { expect(agrees(saved, pattern, value)).toBe(expected); });
});

describe("formatLike prints in the saved text's own form", () => {
  test.each<[string, string | null, number | string | boolean, string]>([
    ["0.31", null, 0.2, "0.20"], ["1,204", null, 1234567.8, "1,234,568"], ["1204", null, 1234567, "1234567"], ["12%", null, 0.5, "50%"], ["12.0 %", null, 0.5, "50.0 %"], ["<0.001", null, 0.0002, "<0.001"], ["<0.001", null, 0.0124, "0.012"], ["< 0.001", null, 0, "< 0.001"],
    ["-1.0", null, -2, "-2.0"], ["−1.0", null, -2, "−2.0"], ["−1.0", null, 2, "2.0"], ["1.0", null, -2, "-2.0"], ["+1.0", null, 2, "+2.0"], ["1.2e-5", null, 0.00034, "3.4e-4"], ["0.0", null, -0.01, "0.0"], ["$5.00", null, -3, "-$3.00"], ["-$5.00", null, 3, "$3.00"], ["3 months", null, 4, "4 months"],
    ["airline", null, "naive", "naive"], ["yes", null, false, "no"], ["true", null, false, "false"], ["x", null, 12.34567, "12.35"], ["x", null, 12, "12"], ["1.2k", "~s", 1300, "1.3k"], ["-1", ".1f", -2, "-2.0"], ["−1", ".1f", -2, "−2.0"], ["999", null, 1000.2, "1000"], ["1,000", null, 999.6, "1,000"],
  ])("%s (%s) of %s: %s", (saved, pattern, value, expected) => { expect(formatLike(saved, pattern, value)).toBe(expected); });

  test("what it prints agrees with the value", () => {
    for (const saved of ["0.31", "1,204", "12%", "<0.001", "-483.2", "1.2e-5", "+3.0", "$5.00", "0"]) {
      for (const value of [0, 0.0004, 0.31, -0.31, 12.5, 1204, -98765.4321, 1e-7]) expect([saved, value, agrees(formatLike(saved, null, value), null, value)]).toEqual([saved, value, true]);
    }
  });
});

describe("a stranger's form or pattern", () => {
  test("pads no number to a page of zeros, and says so", () => {
    expect(patternFault("0>100000000d")).toMatch(/is not a number pattern/);
    expect(formatLike("1", "0>100000000d", 12)).toBe("12");
    expect(patternFault("8.2f")).toBeNull();
  });
  test("with more decimals than a number can be printed with is printed with as many as it can", () => {
    const saved = `1.${"0".repeat(500)}`;
    expect(formatLike(saved, null, 2)).toBe(`2.${"0".repeat(100)}`);
    expect(formatLike(`${saved}e3`, null, 2000).length).toBeLessThan(110);
    expect(agrees(saved, null, 1)).toBe(true);
  });
});
