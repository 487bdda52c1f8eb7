// The public list of the numbers, by topic. Other rooms import from here and from nowhere deeper.

// series
export { makeSeries, isSeries, valuesOf, timesMs, withValues, type Series } from "./series/series.ts";
export { cut, slice } from "./series/cut.ts";
export { applyStep, applySteps, original, stepText, type Step, type AppliedStep } from "./series/steps.ts";
export { timeAt, timesFrom, milliseconds, periodIndex, periodSpan, positionsOf, indexRange, daysIn } from "./series/calendar.ts";
export { parsePeriod, formatPeriod, period, startMs, endMs, type Period, type PeriodUnit } from "./series/period.ts";
export { civilFromDays, daysFromCivil, daysInMonth } from "./series/civil.ts";
export { parseEvery, formatEvery, everyInWords, defaultSeasonLength, periodsAYear } from "./series/every.ts";
export { inferEvery } from "./series/inferEvery.ts";
export { polynomialTrend } from "./series/detrend.ts";
export { mean, variance, sd, first, last, at, between } from "./series/summary.ts";
export { lagged, combine, offsetBetween } from "./series/align.ts";
// correlogram
export { acf, ccf } from "./correlogram/acf.ts";
export { autocovariance } from "./correlogram/autocovariance.ts";
export { pacf } from "./correlogram/pacf.ts";
export { bartlettBand, independentBand } from "./correlogram/bands.ts";
export { correlogram, type Correlogram, type CorrelogramOptions } from "./correlogram/correlogram.ts";
export { type Suggestion } from "./correlogram/suggestOrders.ts";
export { extendedAcf, smallestCanonical, type OrderTable } from "./correlogram/extendedAcf.ts";
export { prewhitenedCcf, type PrewhitenedCcf } from "./correlogram/prewhitenedCcf.ts";
// unitroot
export { adf, type AdfOptions } from "./unitroot/adf.ts";
export { kpss, type KpssOptions } from "./unitroot/kpss.ts";
export { phillipsPerron, type PhillipsPerronOptions } from "./unitroot/phillipsPerron.ts";
export { dfGls, type DfGlsOptions } from "./unitroot/dfGls.ts";
export { type Trend } from "./unitroot/mackinnon.ts";
export { type LagChoice } from "./unitroot/dickeyFullerRegression.ts";
export { type Bandwidth } from "./unitroot/longRunVariance.ts";
export { canovaHansen, type CanovaHansenOptions } from "./unitroot/canovaHansen.ts";
export { differences, differencesSentence } from "./unitroot/differences.ts";
export { stationarity, testingStationarity, type Stationarity, type StationarityOptions } from "./unitroot/stationarity.ts";
// arma
export { fit } from "./arma/fit.ts";
export { fitAt } from "./arma/fitAt.ts";
export { filterWith } from "./arma/filterWith.ts";
export { modelName } from "./arma/modelName.ts";
export { warmUp } from "./arma/warmUp.ts";
export { predict, type Prediction } from "./arma/predict.ts";
export { interpolate, type Interpolation } from "./arma/interpolate.ts";
export { simulate } from "./arma/simulate.ts";
export { roots } from "./arma/roots.ts";
export { expandedPolynomials, type ArmaModel } from "./arma/coefficients.ts";
export { halfLife, impulseResponse, longRun, modelRoots, piWeights, psi, theoreticalAcf, theoreticalAutocovariance, theoreticalPacf, theoreticalSpectrum } from "./arma/theory.ts";
export { autoregressionByLeastSquares, burg, yuleWalker, type AutoregressionFit } from "./arma/autoregression.ts";
export { type Fit, type FitOptions, type Held, type Hold, type Lags, type Method, type Note, type Regressor, type Root, type Season, type StandardErrors } from "./arma/model.ts";
// forecast
export { easterEffect, harmonics, interventionColumns, levelShift, pulse, ramp, temporaryChange, tradingDays, type Columns, type Intervention } from "./forecast/interventions.ts";
export { forecast, forecasting } from "./forecast/forecast.ts";
export { withPauses, type Gradual, type Progress } from "./gradual.ts";
export { refit } from "./forecast/refit.ts";
export { rule, isRule, type SmoothingOptions } from "./forecast/rules.ts";
export { exponentialSmoothing, type Smoothed, type SmoothingWeights } from "./forecast/smoothing/exponentialSmoothing.ts";
export { innovationsFilter, innovationsPath, type Filtered, type SmoothingForm, type SmoothingState } from "./forecast/smoothing/innovations.ts";
export { type Band, type BandsHow, type Difference, type Forecast, type ForecastOptions, type Forecaster, type Growth, type Passing, type Rule, type Scenario, type Total } from "./forecast/model.ts";
// diagnostics
export { rejects, unavailable, type Test } from "./diagnostics/test.ts";
export { boxPierce, ljungBox, monti } from "./diagnostics/portmanteau.ts";
export { isFit, type Subject } from "./diagnostics/subject.ts";
export { jarqueBera } from "./diagnostics/jarqueBera.ts";
export { archLM, mcleodLi } from "./diagnostics/changingVariance.ts";
export { durbinWatson } from "./diagnostics/durbinWatson.ts";
export { cumulativePeriodogram, type CumulativePeriodogram } from "./diagnostics/cumulativePeriodogram.ts";
export { cusum, largestBreak, type Cusum, type LargestBreak } from "./diagnostics/breaks.ts";
export { outliers, type Outlier, type OutlierOptions, type Outliers } from "./diagnostics/outliers.ts";
export { type OutlierType } from "./diagnostics/outlierPattern.ts";
export { quantiles, type Quantiles } from "./diagnostics/qq.ts";
export { checking, diagnostics, type Diagnostics, type DiagnosticsOptions } from "./diagnostics/diagnostics.ts";
// evaluation
export { bias, mae, mape, mase, mpe, rmse, rmsse, smape } from "./evaluation/accuracy.ts";
export { crps, intervalScore, pinball } from "./evaluation/scores.ts";
export { dieboldMariano, type DieboldMariano, type Loss } from "./evaluation/dieboldMariano.ts";
export { gridOfOrders, rankFits, type GridOptions, type Tried } from "./evaluation/gridOfOrders.ts";
export { stepwiseOrders, type PathStep, type Stepwise, type StepwiseOptions } from "./evaluation/stepwiseOrders.ts";
export { type Criterion, type Grid, type GridFailure, type GridRow } from "./evaluation/rankedGrid.ts";
export { rollingOrigins, type Against, type CompareOptions, type Evaluation, type OriginForecast, type RankBy, type RankedModel } from "./evaluation/rollingOrigins.ts";
export { estimateAhead, type Ahead } from "./evaluation/ahead.ts";
export { type Hooks } from "./evaluation/rolling.ts";
export { type Coverage, type Score } from "./evaluation/scoreTable.ts";
export { binomialRange } from "./evaluation/binomialRange.ts";
export { modelConfidenceSet, type ConfidenceSet } from "./evaluation/modelConfidenceSet.ts";
// decompose
export { stl, type Decomposition, type StlOptions } from "./decompose/stl.ts";
export { seasonalStrength, type SeasonalStrength } from "./decompose/seasonalStrength.ts";
export { decompose, subseries, type ClassicalDecomposition, type Subseries } from "./decompose/decompose.ts";
export { estimateLambda, lambdaProfile, type LambdaOptions, type LambdaProfile } from "./decompose/lambda.ts";
export { rangeMean, type RangeMean } from "./decompose/rangeMean.ts";
export { spectrum, type Spectrum, type SpectrumOptions } from "./decompose/spectrum.ts";
// distributions
export { betaInc, erfc, gammaP, gammaQ, logGamma } from "./distributions/special.ts";
export { normalCdf, normalDensity, normalQuantile, normalUpper } from "./distributions/normal.ts";
export { chiSquareCdf, chiSquareQuantile, chiSquareUpper } from "./distributions/chiSquare.ts";
export { tCdf, tQuantile, tUpper } from "./distributions/studentT.ts";
export { fUpper } from "./distributions/fisherF.ts";
