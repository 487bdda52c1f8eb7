// Measures of forecast accuracy and tests of it.

import { bias, binomialRange, crps, dieboldMariano, intervalScore, mae, mape, mase, pinball, rmse, rmsse, smape } from "../../stdlib/index.ts";
import type { LibraryFunction } from "../kind.ts";
import { define, figures, numbers, optional, settings, share, whole } from "./define.ts";

const topic = "accuracy";
const pair = [numbers("actual"), numbers("forecast")] as const;
const scaled = [...pair, numbers("training"), optional(whole("length", 1))] as const;

export const errorFunctions: readonly LibraryFunction[] = [
  define(topic, "bias", pair, "Mean error, actual less forecast.", (a, f) => bias(a, f)),
  define(topic, "mae", pair, "Mean absolute error.", (a, f) => mae(a, f)),
  define(topic, "rmse", pair, "Root of the mean squared error.", (a, f) => rmse(a, f)),
  define(topic, "mape", pair, "Mean absolute percentage error, in percent.", (a, f) => mape(a, f)),
  define(topic, "smape", pair, "Symmetric mean absolute percentage error, in percent.", (a, f) => smape(a, f)),
  define(topic, "mase", scaled, "Mean absolute error over that of the (seasonal) naive rule in the training data.", (a, f, training, length) => mase(a, f, training, length)),
  define(topic, "rmsse", scaled, "Root of the mean squared error over that of the (seasonal) naive rule in the training data.", (a, f, training, length) => rmsse(a, f, training, length)),
  define(topic, "pinball", [figures("actual"), figures("quantile"), share("level")], "Mean pinball loss of a quantile forecast; `level` is the quantile's probability.", (a, q, level) => pinball(a, q, level)),
  define(topic, "crps", [figures("actual"), figures("mean"), figures("se")], "Mean continuous ranked probability score of normal forecasts.", (a, m, se) => crps(a, m, se)),
  define(topic, "intervalScore", [figures("actual"), figures("low"), figures("high"), share("level")], "Mean interval score of bands of a level.", (a, low, high, level) => intervalScore(a, low, high, level)),
  define(topic, "binomialRange", [whole("n", 1), share("p"), optional(share("level"))], "Share of n trials that chance alone gives an event of probability p, as {low, high}: for judging coverage.", (n, p, level) => binomialRange(n, p, level)),
  define(topic, "dieboldMariano", [numbers("errorsA"), numbers("errorsB"), optional(settings("options", ["horizon", "loss"]))], "Diebold-Mariano test of equal accuracy, as Harvey, Leybourne and Newbold correct it.", (a, b, options) => dieboldMariano(a, b, options as Parameters<typeof dieboldMariano>[2])),
];
