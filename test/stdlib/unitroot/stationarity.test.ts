import { describe, expect, it } from "vitest";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { differences, differencesSentence } from "../../../stdlib/unitroot/differences.ts";
import { stationarity } from "../../../stdlib/unitroot/stationarity.ts";
import { seriesOf } from "../referenceCases.ts";

describe("stationarity", () => {
  it("says that the tests agree: a random walk, and a trend-stationary series", () => {
    const walk = stationarity({ series: seriesOf("sim_rw") });
    expect(walk.verdict).toBe("unit root");
    expect(walk.together).toContain("none of ADF, Phillips-Perron and DF-GLS rejects a unit root and KPSS rejects stationarity");
    const still = stationarity({ series: seriesOf("sim_trendstat"), trend: "linear" });
    expect(still.verdict).toBe("stationary");
    expect(still.together).toContain("stationary around a straight trend");
  });
  it("says that they disagree: the river's flow, whose level broke", () => {
    const nile = stationarity({ series: seriesOf("nile") });
    expect(nile.verdict).toBe("disagree");
    expect(nile.together).toMatch(/^The tests disagree at the 5% level/);
  });
  it("tests the season of a monthly series, and its differences side by side", () => {
    const s = stationarity({ series: makeSeries({ name: "passengers", every: "P1M", start: "1949-01", values: seriesOf("airline").map(Math.log) }), trend: "linear" });
    expect(s.seasonLength).toBe(12);
    expect(s.seasonal?.sentence).toContain("a seasonal difference is called for");
    expect(s.strength!.seasonal).toBeGreaterThan(0.9);
    expect(s.differences.map((r) => r.label)).toEqual(["none", "1", "1 twice", "12", "1 and 12", "1 twice and 12"]);
    // Box & Jenkins (1976), section 9.2: variance falls to one difference of each kind and rises after.
    expect(s.differencesSentence).toContain("after differences at lags 1 and 12. Two differences at lag 1 and one at lag 12 look like one too many");
    expect(s.differences[5].overDifferenced).toContain("lag-1 autocorrelation is −0.6");
  });
  it("marks a series that was differenced once too often", () => {
    const rows = differences(seriesOf("sim_white"), null);
    expect(rows[0].overDifferenced).toBeNull();
    expect(rows[1].overDifferenced).toMatch(/^the variance rises from .* and the lag-1 autocorrelation is −0\.5/);
    expect(differencesSentence(rows)).toMatch(/^The variance is smallest without differencing. Signs of one difference too many .*: a difference at lag 1; two differences at lag 1\. /);
  });
  it("answers in words where the data cannot", () => {
    for (const series of [[], [1], [1, 2], Array.from({ length: 40 }, () => 7)]) {
      const s = stationarity({ series });
      expect(s.verdict).toBe("unavailable");
      expect(s.together).toMatch(/^The data cannot answer: /);
    }
    expect(stationarity({ series: makeSeries({ name: "x", every: "P1M", start: "2020-01", values: seriesOf("nile").slice(0, 30) }) }).notes.join()).toContain("Fewer than three seasons");
    expect(() => stationarity({ series: [1, 2, 3], level: 5 })).toThrow("level is 5");
  });
});
