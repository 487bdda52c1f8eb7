// The kinds of cells, one line a kind, in the order in which help lists them; and the language as the engine takes it.

import { estimateAhead } from "../stdlib/index.ts";
import { checkOptions } from "./check.ts";
import { chart } from "./chart.ts";
import { choice } from "./choice.ts";
import { claims } from "./claims.ts";
import { compare } from "./compare.ts";
import { correlogram } from "./correlogram.ts";
import { decomposition } from "./decomposition.ts";
import { diagnostics } from "./diagnostics.ts";
import { fit } from "./fit.ts";
import { forecast } from "./forecast.ts";
import type { Kind, Language } from "./kind.ts";
import { constants, library } from "./library.ts";
import { load } from "./load/load.ts";
import { script } from "./script.ts";
import { slider } from "./slider.ts";
import { stationarity } from "./stationarity.ts";
import { sweep } from "./sweep.ts";
import { switchKind } from "./switch.ts";
import { table } from "./table.ts";
import { transform } from "./transform.ts";
import { values } from "./values.ts";
import { windowKind } from "./window.ts";

const kinds: readonly Kind<never, unknown>[] = [
  load,
  slider,
  choice,
  switchKind,
  windowKind,
  values,
  transform,
  decomposition,
  stationarity,
  correlogram,
  fit,
  diagnostics,
  compare,
  forecast,
  sweep,
  claims,
  chart,
  table,
  script,
];

export const language: Language = { kinds, library, constants, check: checkOptions, ahead: { estimates: estimateAhead } };
