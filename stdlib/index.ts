// The public list of the numbers, by topic. Other rooms import from here and from nowhere deeper.

// series
// correlogram
// unitroot
// arma
// forecast
export { easterEffect, harmonics, interventionColumns, levelShift, pulse, ramp, temporaryChange, tradingDays, type Columns, type Intervention } from "./forecast/interventions.ts";
// diagnostics
export { printedP, unavailable, type Test } from "./diagnostics/test.ts";
// evaluation
// decompose
// distributions
export { betaInc, erfc, gammaP, gammaQ, logGamma } from "./distributions/special.ts";
export { normalCdf, normalDensity, normalQuantile, normalUpper } from "./distributions/normal.ts";
export { chiSquareCdf, chiSquareQuantile, chiSquareUpper } from "./distributions/chiSquare.ts";
export { tCdf, tQuantile, tUpper } from "./distributions/studentT.ts";
export { fUpper } from "./distributions/fisherF.ts";
