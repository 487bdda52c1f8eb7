// The library of the language: every function that an expression may call, by topic.

import type { LibraryFunction } from "./kind.ts";
import { errorFunctions } from "./library/errors.ts";
import { identifyFunctions } from "./library/identify.ts";
import { modelFunctions } from "./library/models.ts";
import { plainFunctions } from "./library/plain.ts";
import { seriesFunctions } from "./library/series.ts";

/** In the order in which help lists them. Kinds that are also functions (`fit({…})`) are not among them. */
export const library: readonly LibraryFunction[] = [...seriesFunctions, ...identifyFunctions, ...modelFunctions, ...errorFunctions, ...plainFunctions];

/** Names with a fixed value, besides those that every expression knows. */
export const constants: Readonly<Record<string, unknown>> = {};
