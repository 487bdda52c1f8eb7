// The kind that asks what a fitted model has left undone.

import { checking, type Diagnostics, type Fit } from "../stdlib/index.ts";
import { OptionError, type Kind, type OptionTable, type RunContext } from "./kind.ts";
import { diagnosticsParts } from "./parts/diagnosticsParts.ts";
import { inSlices } from "./parts/inSlices.ts";
import { needLevel } from "./parts/needs.ts";

export interface DiagnosticsCell {
  readonly model: unknown;
  readonly lags?: number;
  readonly level?: number;
}

const diagnosticsOptions: OptionTable = {
  model: { type: "fit", required: true, sentence: "The fit whose residuals are examined.", example: "airline" },
  lags: { type: "integer", min: 1, sentence: "The largest lag of the tests across lags; without this option, up to two seasons where the data allow." },
  level: { type: "level", default: 0.95, sentence: "Confidence at which a test is read as finding something." },
};

/** Residuals in time, what is left in them, and what to try about it. */
export const diagnostics: Kind<DiagnosticsCell, Diagnostics> = {
  name: "diagnostics",
  sentence: "Diagnostic checking of a fit: what its residuals still hold, and what to try about it.",
  options: diagnosticsOptions,
  body: "options",
  callable: true,
  example: "model: airline",
  run: (options, context) => runDiagnostics(options, context),
  show: (result, context) => diagnosticsParts(result, context.width),
};

async function runDiagnostics(options: DiagnosticsCell, context: RunContext): Promise<Diagnostics> {
  const model = needFit(options.model);
  const level = needLevel(options.level);
  const n = model.residuals.n;
  const lags = options.lags ?? undefined;
  if (lags !== undefined && (!Number.isInteger(lags) || lags < 1 || lags >= n)) {
    throw new OptionError("lags", `lags is ${lags}; with ${n} residuals it can be a whole number from 1 to ${n - 1}`);
  }
  return inSlices(checking({ model, level, ...(lags === undefined ? {} : { lags }) }), context);
}

/** A fit, or the fit in a ranked row of a comparison. */
function needFit(value: unknown, option = "model"): Fit {
  if (typeof value === "object" && value !== null) {
    if ("sigma2" in value && "residuals" in value) return value as Fit;
    if ("rule" in value) throw new OptionError(option, `${option} is a rule of comparison, which has no fitted residuals to check; give it a fit`);
    if ("fit" in value && typeof value.fit === "object" && value.fit !== null) return needFit(value.fit, option);
    if ("values" in value && "times" in value) throw new OptionError(option, `${option} is a series; fit a model to it first`);
  }
  throw new OptionError(option, `${option} needs a fit, such as the name of a fit cell`);
}
