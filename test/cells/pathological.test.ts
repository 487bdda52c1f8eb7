// Series that break carelessly written views: each gives a result that can be read, or a refusal in words.

import { describe, expect, test } from "vitest";
import { checkOptions } from "../../cells/check.ts";
import { compare } from "../../cells/compare.ts";
import { correlogram } from "../../cells/correlogram.ts";
import { diagnostics } from "../../cells/diagnostics.ts";
import { fit } from "../../cells/fit.ts";
import { forecast } from "../../cells/forecast.ts";
import { OptionError, type Kind } from "../../cells/kind.ts";
import type { Part } from "../../cells/parts/part.ts";
import { stationarity } from "../../cells/stationarity.ts";
import { makeSeries } from "../../stdlib/index.ts";
import { drawnCharts } from "./drawn.ts";
import { madeContext } from "./madeContext.ts";

const range = (n: number, f: (i: number) => number): Float64Array => Float64Array.from({ length: n }, (_, i) => f(i));
const noise = (i: number): number => ((i * 7919 + 104729) % 1009) / 1009 - 0.5;

const series: Readonly<Record<string, Float64Array>> = {
  "empty": range(0, () => 0),
  "one value": range(1, () => 3),
  "two values": range(2, i => i),
  "constant": range(40, () => 7),
  "two levels only": range(40, i => (i * 7) % 3 === 0 ? 1 : 0),
  "one outlier of 1e12": range(60, i => i === 30 ? 1e12 : noise(i)),
  "alternating signs": range(40, i => i % 2 === 0 ? 1 : -1),
  "as many values as the model has coefficients and one": range(3, i => noise(i)),
  "all missing but three": range(40, i => i % 15 === 2 ? noise(i) : NaN),
  "all missing": range(20, () => NaN),
  "a straight line": range(50, i => 2 * i + 1),
  "whole numbers of 1e15": range(60, i => 1e15 + Math.round(1000 * noise(i))),
  "tiny numbers": range(60, i => 1e-200 * noise(i)),
  "an infinite value": range(30, i => i === 4 ? Infinity : noise(i)),
};

/** Parts of a run, or the words of its refusal. */
async function outcome(kind: Kind<never, never>, options: Record<string, unknown>): Promise<{ readonly result: unknown; readonly parts: readonly Part[]; readonly words: string | null }> {
  try {
    const result = await kind.run(checkOptions(kind, options) as never, madeContext());
    return { result, parts: kind.show(result, { name: "x", width: 640 }), words: null };
  } catch (error) {
    if (!(error instanceof OptionError)) throw error;
    return { result: null, parts: [], words: error.message };
  }
}

async function readable(what: string, { parts, words }: { readonly parts: readonly Part[]; readonly words: string | null }): Promise<void> {
  const said = words !== null ? [words] : parts.flatMap(part => part.part === "text" ? [part.text] : part.part === "chart" ? [part.title, part.alt] : part.part === "equation" ? [part.text] : []);
  expect(said.length, what).toBeGreaterThan(0);
  expect(said.filter(text => /NaN|undefined|Infinity|\[object|is not a function/.test(text)), what).toEqual([]);
  await drawnCharts(parts);
}

describe("every kind that models a series gives a readable result or a refusal for", () => {
  for (const [name, values] of Object.entries(series)) {
    test(name, async () => {
      const x = makeSeries({ name: "odd", values });
      await readable("correlogram", await outcome(correlogram as never, { series: x }));
      await readable("stationarity", await outcome(stationarity as never, { series: x }));
      const fitted = await outcome(fit as never, { series: x, ar: 1, ma: 1 });
      await readable("fit", fitted);
      await readable("compare", await outcome(compare as never, { series: x, ar: 1, ma: 1 }));
      if (fitted.result === null) return;
      await readable("diagnostics", await outcome(diagnostics as never, { model: fitted.result }));
      await readable("forecast", await outcome(forecast as never, { model: fitted.result, horizon: 3 }));
    });
  }
});
