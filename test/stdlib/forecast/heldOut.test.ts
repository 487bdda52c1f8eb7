import { expect, it } from "vitest";
import { forecast } from "../../../stdlib/forecast/forecast.ts";
import { rule } from "../../../stdlib/forecast/rules.ts";
import { cut } from "../../../stdlib/series/cut.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { applyStep } from "../../../stdlib/series/steps.ts";

it("a forecast has beside it what a window before the steps held out, in the units of the data", () => {
  const raw = makeSeries({ name: "crossings", unit: "vehicles", every: "P1M", start: "2019-01", values: [1, 2, 4, 8, 16, 32] });
  const logs = applyStep(cut(raw, { to: "2019-04" }), { step: "log" });
  const { heldOut, origin } = forecast(rule.naive(logs), { horizon: 3 });
  expect([origin, heldOut?.start, ...(heldOut?.values ?? [])]).toEqual(["2019-04", "2019-05", 16, 32]);
  expect(forecast(rule.naive(applyStep(raw, { step: "log" })), { horizon: 3 }).heldOut).toBeNull();
});
