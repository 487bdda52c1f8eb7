// How the bands are made: by the model's formula, by simulation, or from errors at held-out origins. Each says what it assumes.

import type { Note } from "../arma/model.ts";
import type { Series } from "../series/series.ts";
import { calibratedOutlook } from "./calibrated.ts";
import type { Gradual } from "../gradual.ts";
import { modelOutlook, type ModelOutlook } from "./modelOutlook.ts";
import type { Band, BandsHow, Forecaster } from "./model.ts";
import type { Outlook } from "./outlook.ts";
import { simulatedOutlook, type ParameterSets } from "./simulated.ts";

export interface BandsOptions {
  readonly how: BandsHow;
  readonly regressors: Readonly<Record<string, Series>>;
  readonly seed: number;
  readonly levels: readonly number[];
  /** For simulated bands of a fit: shared by forecasts of several futures. */
  readonly sets?: ParameterSets;
}

/** A forecast distribution with bands of the asked kind, and notes on what they rest on. */
export function* bandedOutlook(model: Forecaster, horizon: number, { how, regressors, seed, levels, sets }: BandsOptions): Gradual<ModelOutlook> {
  if (how !== "plugIn" && how !== "simulated" && how !== "calibrated") throw new RangeError(`forecast: bands is ${JSON.stringify(how)}, expected "plugIn", "simulated" or "calibrated"`);
  const plain = modelOutlook(model, horizon, regressors, seed);
  const { outlook, assumption } = how === "plugIn" ? { outlook: plain.outlook, assumption: plugIn }
    : how === "simulated" ? yield* simulatedOutlook(model, horizon, regressors, seed, plain, sets) : yield* calibratedOutlook(model, horizon, regressors, seed, levels, plain);
  return { ...plain, outlook, notes: [...plain.notes, assumption, conditional] };
}

/** The limits at each level. */
export const bandsOf = (outlook: Outlook, levels: readonly number[]): Band[] => levels.map((level) => ({ level, low: outlook.quantile((1 - level) / 2), high: outlook.quantile((1 + level) / 2) }));

const plugIn: Note = { code: "bands-plug-in", tone: "note", text: "Bands: from the model's formula. They take the estimated parameters as if they were known, and the shocks as normal with one variance; with short series they are somewhat too narrow." };
const conditional: Note = { code: "bands-conditional", tone: "note", text: "Bands are conditional on the model: they hold if it keeps describing the series, and no band covers a break." };
