import { expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import { estimateAhead, type Ahead } from "../../../stdlib/evaluation/ahead.ts";
import { rollingOrigins, type CompareOptions } from "../../../stdlib/evaluation/rollingOrigins.ts";
import { rule } from "../../../stdlib/forecast/rules.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { applySteps } from "../../../stdlib/series/steps.ts";
import { referenceSeries } from "../forecast/reference.ts";

const { times, values } = referenceSeries("airline");
const s = makeSeries({ name: "passengers", every: "P1M", start: times[0], values });
const price = makeSeries({ name: "price", every: "P1M", start: times[0], values: values.map((v, t) => Math.sin(t) + v / 1000) });
const model = fit({ series: applySteps(s, [{ step: "log" }, { step: "difference", lag: 12 }]), ar: 1, season: { length: 12, ma: 1 }, regressors: { price } });
const models = { model, mix: rule.combine([model, rule.smoothing(s)]), simple: rule.smoothing(s, { trend: "additive" }), naive: rule.naive(s) };

// Sent through structured cloning there and back, as between workers.
it.each<[string, Partial<CompareOptions>, number]>([
  ["refitted at each origin", {}, 3 * 4], ["refitted now and then", { refit: 2 }, 3 * 2], ["held", { refit: false }, 3], ["over a sliding sample", { training: "sliding" }, 3 * 4],
])("estimates made elsewhere leave nothing to estimate, and are the same: %s", async (_, change, count) => {
  const options = { origins: 4, horizon: 2, ...change }, kept = new Map<string, unknown>(), madeHere: string[] = [];
  let work: Ahead | null = null;
  const elsewhere = await rollingOrigins(models, options, {
    ahead(given) {
      work = structuredClone(given);
      const make = estimateAhead(work.shared);
      for (const item of work.items.toReversed()) kept.set(item.key, structuredClone(make(item)));
    },
    recall<T>(key: string, make: () => T): T {
      if (!kept.has(key)) { if (key.startsWith("estimate") && !key.includes('rule:"naive"') && !key.includes('rule:"seasonalNaive"')) madeHere.push(key); kept.set(key, make()); }
      return kept.get(key) as T;
    },
  });
  // The naive rules cost nothing and are not sent.
  expect(work!.items.length).toBe(count);
  expect(madeHere).toEqual([]);
  expect(elsewhere).toEqual(await rollingOrigins(models, options));
});
