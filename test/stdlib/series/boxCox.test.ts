import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { applyStep } from "../../../stdlib/series/steps.ts";
import { mean, variance } from "../../../stdlib/series/summary.ts";

// Reference values: test/reference/expected/boxcox.json (R 4.2.2 and scipy, as each case says in `source`).
interface Case { readonly id: string; readonly series: string; readonly transform: readonly unknown[]; readonly what: string; readonly inputs: { readonly lambda: number }; readonly expected: { readonly first: number[]; readonly last: number[]; readonly mean: number; readonly variance: number }; readonly tolerance: { readonly rel: number }; readonly source: string }
const folder = join(import.meta.dirname, "../../reference");
const cases = (JSON.parse(readFileSync(join(folder, "expected/boxcox.json"), "utf8")) as Case[]).filter((c) => c.what === "boxcox" && c.transform.length === 0);
const read = (name: string): number[] => readFileSync(join(folder, `series/${name}.csv`), "utf8").trim().split("\n").slice(1).map((line) => Number(line.split(",")[1]));

describe("boxCox against reference values", () => {
  it("there are cases", () => { expect(cases.length).toBeGreaterThan(3); });
  it.each(cases.map((c) => [c.id, c] as const))("%s", (_, { series, inputs, expected, tolerance }) => {
    const { values } = applyStep(makeSeries({ name: series, values: read(series) }), { step: "boxCox", lambda: inputs.lambda });
    const near = (found: number, wanted: number): void => { expect(Math.abs(found - wanted)).toBeLessThanOrEqual(tolerance.rel * Math.max(1e-12, Math.abs(wanted))); };
    expected.first.forEach((v, i) => near(values[i], v));
    expected.last.forEach((v, i) => near(values[values.length - expected.last.length + i], v));
    near(mean(values), expected.mean);
    near(variance(values), expected.variance);
  });
});
