// The tables of a comparison at held-out origins: who stands where, how honest the bands were, whether a difference is more than chance.

import type { Evaluation } from "../../stdlib/index.ts";
import type { Columns, TablePart } from "./part.ts";
import { count, lagsInWords, listOf, percent, pText } from "./words.ts";

type Model = Evaluation["models"][number];
type Coverage = Model["coverage"][number];
type Pair = Evaluation["against"][number];
type Score = Evaluation["naive"];

const mostPairs = 15;
const scoreNames = ["bias", "mae", "rmse", "mape", "smape", "mase", "rmsse", "pinball", "crps"] as const;

export function isNaive(model: Model): boolean {
  return "rule" in model.model && (model.model.rule === "naive" || model.model.rule === "seasonalNaive");
}

export const measureNames: Readonly<Record<Evaluation["rankedBy"], string>> = {
  mase: "MASE", mae: "mean absolute error", rmse: "root mean squared error", rmsse: "RMSSE", mape: "MAPE", smape: "sMAPE", crps: "CRPS", pinball: "pinball loss",
};

export function standingsTable(result: Evaluation): TablePart {
  const { rankedBy, unit } = result;
  // Those that have no column anyway.
  const ranked = rankedBy === "rmsse" || rankedBy === "smape" || rankedBy === "pinball" ? [rankedBy] : [];
  const rows = result.models.map(model => model);
  const naive = result.models.some(model => model.label === result.naive.label) ? [] : [result.naive];
  return {
    part: "table", title: `Errors over ${count(result.origins.length, "origin")}, ${result.horizon === 1 ? "one period" : `1 to ${result.horizon} periods`} ahead`,
    columns: [
      { title: "place", align: "right", format: "d" }, { title: "model" },
      ...ranked.map(key => ({ title: measureNames[key], align: "right" as const, format: ",.3~r" })),
      { title: "MASE", align: "right", format: ",.3f" }, { title: "mean absolute error", align: "right", format: ",.4~r", unit },
      { title: "root mean squared error", align: "right", format: ",.4~r", unit }, { title: "bias", align: "right", format: "+,.3~r", unit },
      { title: "MAPE", align: "right", format: ",.1f", unit: "%" }, { title: "CRPS", align: "right", format: ",.4~r", unit },
      { title: "beats naive" },
    ],
    rows: [
      ...rows.map(model => [model.rank, model.label, ...ranked.map(key => model[key]), model.mase, model.mae, model.rmse, model.bias, model.mape, model.crps, isNaive(model) ? "is a naive rule" : model.beatsNaive]),
      ...naive.map(score => [null, score.label, ...ranked.map(key => score[key]), score.mase, score.mae, score.rmse, score.bias, score.mape, score.crps, "the rule to beat"]),
    ],
    marked: [{ row: 0, word: "best" }],
    note: `Bias is what happened less the forecast: above zero, forecasts were too low. ${setSentence(result)}`,
  };
}

function setSentence(result: Evaluation): string {
  const { confidenceSet, models } = result;
  if (confidenceSet.status === "unavailable") return `No model confidence set: ${confidenceSet.note}.`;
  const inside = models.filter(model => model.inSet);
  return inside.length === models.length
    ? `The ${percent(confidenceSet.level)} model confidence set holds all of them: these origins do not tell them apart.`
    : `The ${percent(confidenceSet.level)} model confidence set holds ${listOf(inside.map(model => model.label))}.`;
}

/** Over all horizons, and at each of them where there are several. */
export function coverageTables(result: Evaluation): readonly TablePart[] {
  const note = "The range is the exact 95% binomial one for independent tries.", band: TablePart["columns"][number] = { title: "band", align: "right", format: ".0%" };
  const range: TablePart["columns"] = [{ title: "chance allows from", align: "right", format: ".1%" }, { title: "to", align: "right", format: ".1%" }, { title: "reading" }];
  const all: TablePart = {
    part: "table", title: "How often the bands held what happened", columns: [{ title: "model" }, band, { title: "held", align: "right", format: ".1%" }, ...range],
    rows: result.models.flatMap(model => model.coverage.map(each => [model.label, each.level, each.share, each.low, each.high, coverageReading(each)])), note,
  };
  if (result.horizon === 1) return [all];
  return [all, {
    part: "table", title: "How often the bands held, by how many periods ahead", columns: [{ title: "model" }, band, ...horizons(result, ".0%"), ...range],
    rows: result.models.flatMap(model => model.coverage.map(({ level }, i) => {
      const each = scoresOf(result, model.label).map(score => score.coverage[i]), outside = each.flatMap((one, h) => (one.within || Number.isNaN(one.share) ? [] : [h + 1]));
      return [model.label, level, ...each.map(one => one.share), each[0].low, each[0].high, outside.length === 0 ? "as promised" : `outside at ${lagsInWords(outside)}`];
    })), note,
  }];
}

function coverageReading({ share, low, high, within }: Coverage): string {
  if (Number.isNaN(share)) return "not scored";
  if (low === 0 && high === 1) return "too few to tell";
  if (within) return "as promised";
  return share < low ? "too narrow" : "too wide";
}

function horizons(result: Evaluation, format: string): TablePart["columns"] {
  return Array.from({ length: result.horizon }, (_, h) => ({ title: String(h + 1), align: "right" as const, format }));
}

function scoresOf(result: Evaluation, label: string): Evaluation["scores"] {
  return result.scores.filter(score => score.label === label && score.horizon !== "all");
}

/** Over all horizons, and at each of them where there are several. */
export function pairTables(result: Evaluation): readonly TablePart[] {
  const overall = result.against.filter(row => row.horizon === "all"), shown = overall.slice(0, mostPairs);
  if (shown.length === 0) return [];
  const note = `Equal accuracy is the null hypothesis (Diebold and Mariano 1995, as corrected by Harvey, Leybourne and Newbold 1997).${overall.length > shown.length ? ` The first ${shown.length} of ${overall.length} pairs.` : ""}`;
  const all: TablePart = {
    part: "table", title: "Model against model, over all horizons",
    columns: [{ title: "pair" }, { title: "smaller errors" }, { title: "by", align: "right", format: ",.3~r" }, { title: "p", align: "right" }, { title: "reading" }],
    rows: shown.map(row => [
      pairName(row), row.meanDifference === 0 ? "neither" : row.meanDifference < 0 ? row.a : row.b, Math.abs(row.meanDifference), shortP(row),
      Number.isNaN(row.p) ? row.note ?? "no test" : row.p < 0.05 ? "more than chance" : "may be chance",
    ]), note,
  };
  if (result.horizon === 1) return [all];
  return [all, {
    part: "table", title: "p by how many periods ahead", columns: [{ title: "pair" }, ...horizons(result, ".2f").map(({ title, align }) => ({ title, align })), { title: "remark" }],
    rows: shown.map(row => {
      const single = result.against.filter(each => each.horizon !== "all" && each.a === row.a && each.b === row.b), none = single.find(each => Number.isNaN(each.p));
      return [pairName(row), ...single.map(shortP), none === undefined ? "" : `at ${none.horizon}: ${none.note ?? "no test"}`];
    }), note,
  }];
}

function pairName({ a, b }: Pair): string {
  return `${a} against ${b}`;
}

function shortP({ p }: Pair): string {
  return Number.isNaN(p) ? "–" : pText(p).replace(/^p (= )?/, "");
}

/** Every score over all horizons; those at each horizon are in the data of the chart. */
export function scoreTable({ models, naive, unit }: Evaluation): TablePart {
  const rows: readonly Score[] = [...models, ...(models.some(model => model.label === naive.label) ? [] : [naive])], levels = naive.coverage.map(each => each.level);
  const unitOf = (measure: (typeof scoreNames)[number]): string => (measure === "mape" || measure === "smape" ? "%" : measure === "mase" || measure === "rmsse" ? "" : unit);
  return {
    part: "table", title: "All scores",
    columns: [
      { title: "model" }, { title: "forecasts", align: "right", format: ",d" },
      ...scoreNames.map(measure => ({ title: measure === "bias" ? "bias" : measureNames[measure], align: "right" as const, format: ",.4~r", unit: unitOf(measure) })),
      ...levels.map(level => ({ title: `interval score ${percent(level)}`, align: "right" as const, format: ",.4~r", unit })),
    ],
    rows: rows.map(score => [score.label, score.n, ...scoreNames.map(measure => score[measure]), ...score.intervalScore.map(each => each.score)]),
    note: "The pinball loss is the mean over the limits of all bands.",
  };
}

/** Every score of every model and horizon, for whoever takes the data out. */
export function scoreColumns(scores: readonly Score[]): Columns {
  const levels = scores[0]?.coverage.map(row => row.level) ?? [];
  return {
    model: scores.map(score => score.label), horizon: scores.map(score => String(score.horizon)),
    ...Object.fromEntries((["n", ...scoreNames] as const).map(name => [name, scores.map(score => score[name])])),
    ...Object.fromEntries(levels.flatMap((level, i) => [
      [`interval score ${percent(level)}`, scores.map(score => score.intervalScore[i].score)], [`coverage ${percent(level)}`, scores.map(score => score.coverage[i].share)],
    ])),
  };
}

export function failureTables(result: Evaluation): readonly TablePart[] {
  if (result.failures.length === 0) return [];
  return [{
    part: "table", title: "Forecasts that could not be made", columns: [{ title: "model" }, { title: "origin" }, { title: "reason" }],
    rows: result.failures.slice(0, 20).map(one => [one.label, one.origin, one.reason]),
    ...(result.failures.length > 20 ? { note: `The first 20 of ${result.failures.length}.` } : {}),
  }];
}
