import { describe, expect, test } from "vitest";
import { checkOptions } from "../../cells/check.ts";
import { fit } from "../../cells/fit.ts";
import { forecast } from "../../cells/forecast.ts";
import { transform } from "../../cells/transform.ts";
import type { Kind, OptionTable } from "../../cells/kind.ts";
import { makeSeries } from "../../stdlib/index.ts";

const series = makeSeries({ name: "y", every: "P1M", start: "2020-01", values: Float64Array.from({ length: 24 }, (_, i) => i) });
const model = { phi: [], theta: [], sigma2: 1 };

/** What an author is told; null where nothing is wrong. */
function told(kind: { readonly name: string; readonly body: Kind["body"]; readonly options: OptionTable }, given: Readonly<Record<string, unknown>>, sources?: Readonly<Record<string, string>>): string | null {
  try {
    checkOptions(kind, given, sources);
    return null;
  } catch (error) {
    return error instanceof Error ? error.message : String(error);
  }
}

describe("a refused option says what to write", () => {
  test("a season that is only a length", () => {
    expect(told(fit, { series, season: 12 })).toBe("`season` is the number 12: write `{length: 12, ma: 1}`");
    expect(told(fit, { series, season: "12" })).toBe("`season` is the text \"12\", expected an object in braces: `{name: value}`");
  });

  test("one thing where a list is wanted lacks its brackets", () => {
    expect(told(transform, { series, steps: () => series }, { steps: "log" })).toBe("`steps` is a function, expected a list in brackets: write `[log]`");
    expect(told(forecast, { model, horizon: 3, levels: 0.9 })).toBe("`levels` is the number 0.9, expected a list in brackets: write `[0.9]`");
  });

  test("a percentage where a level is wanted, and which item it is", () => {
    expect(told(forecast, { model, horizon: 3, levels: [0.5, 95] })).toBe("item 2 of `levels` is the number 95, expected a confidence level between 0 and 1: write 0.95 for 95%");
    expect(told(forecast, { model, horizon: 3, levels: 95 })).toMatch(/expected a list in brackets, each item a confidence level/);
  });

  test("what is right is taken", () => {
    expect(told(fit, { series, season: { length: 12, ma: 1 } })).toBeNull();
    expect(told(forecast, { model, horizon: 3, levels: [0.5, 0.95] })).toBeNull();
  });
});
