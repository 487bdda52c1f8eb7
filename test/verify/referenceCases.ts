// Which expressions of the language answer which reference case.

import type { Case, Check, Written } from "./referenceNotebook.ts";
import { cell, checksOf, modelCells, seriesCells, Unsupported, write } from "./referenceNotebook.ts";

const trends: Readonly<Record<string, string>> = { n: "none", c: "constant", ct: "linear", ctt: "quadratic" };

const list = (value: unknown): readonly number[] => (Array.isArray(value) ? (value as number[]) : [value as number]);

/** The notebook of a case; throws `Unsupported` where the language has no word for what it asks. */
export function notebookOf(item: Case): Written {
  const writer = writers[item.what];
  if (!writer) throw new Unsupported(`no notebook for "${item.what}"`);
  return writer(item);
}

const ofSeries = (checks: (item: Case) => readonly Check[]) => (item: Case): Written => write(seriesCells(item.series as string, item.transform, "y"), checks(item));

const ofResiduals = (checks: (item: Case, x: string) => readonly Check[]) => (item: Case): Written =>
  item.inputs.model ? write(modelCells(item), checks(item, "m.residuals")) : write(seriesCells(item.series as string, item.transform, "y"), checks(item, "y"));

/** A plain autoregression of a series, by another method than maximum likelihood. */
function autoregression(method: string, checks: (item: Case, order: number) => readonly Check[]): (item: Case) => Written {
  return (item) => {
    const order = item.inputs.order as number;
    const cells = `${seriesCells(item.series as string, item.transform, "y")}\n${cell("fit", "m", { series: "y", ar: String(order), mean: "true", method: `"${method}"` })}`;
    return write(cells, [...checksOf(item, "ar", (i) => `m.phi[${i}]`), ...checksOf(item, "mean", () => "m.mean"), ...checks(item, order)]);
  };
}

function coefficients(item: Case): readonly Check[] {
  const model = item.inputs.model;
  const expected = (item.expected.coef ?? {}) as Readonly<Record<string, number | readonly number[]>>;
  const se = item.expected.se as Readonly<Record<string, number | readonly number[]>> | undefined;
  if (!model) return [];
  const places: Readonly<Record<string, (i: number) => string>> = {
    ar: (i) => `m.phi[${model.arLags[i] - 1}]`,
    ma: (i) => `m.theta[${model.maLags[i] - 1}]`,
    sar: (i) => `m.seasonalPhi[${(model.seasonal?.arLags[i] ?? 1) - 1}]`,
    sma: (i) => `m.seasonalTheta[${(model.seasonal?.maLags[i] ?? 1) - 1}]`,
    constant: () => "m.mean",
    beta: (i) => `m.beta.x${i + 1}`,
  };
  const tolerance = item.tolerance.fields?.coef ?? item.tolerance;
  return Object.entries(expected).flatMap(([field, value]) => list(value).flatMap((v, i): Check[] => {
    const error = se === undefined ? undefined : list(se[field])[i];
    const within = tolerance.ofSe !== undefined ? (error === undefined ? 1e-3 * Math.max(1, Math.abs(v)) : tolerance.ofSe * error) : tolerance.abs ?? (tolerance.rel ?? 0) * Math.max(...list(value).map(Math.abs));
    const at = places[field](i);
    const own: Check = { expression: at, field: `coef.${field}`, expected: v, within };
    if (error === undefined) return [own];
    return [own, { expression: at.replace("m.", "m.se."), field: `se.${field}`, expected: error, within: (item.tolerance.fields?.se?.rel ?? 1e-2) * error }];
  }));
}

/** A forecast comes back in the units of the data: where the case stays in logarithms, its logarithm is compared. */
function forecastChecks(item: Case): readonly Check[] {
  const at = (path: string) => (i: number): string => `${path}[${i}]`;
  const se = checksOf(item, "se", at("f.se"));
  if (item.inputs.backTransform === "log") {
    return [...se, ...checksOf(item, "median", at("f.median")), ...checksOf(item, "meanLognormal", at("f.mean")), ...checksOf(item, "lower95Back", at("f.bands[1].low")), ...checksOf(item, "upper95Back", at("f.bands[1].high"))];
  }
  const inLogs = item.transform.includes("log");
  const scale = (path: string) => (i: number): string => (inLogs ? `log(${path}[${i}])` : `${path}[${i}]`);
  return [
    ...se,
    ...checksOf(item, "point", scale("f.median")),
    ...(inLogs ? [] : checksOf(item, "point", scale("f.mean"))),
    ...checksOf(item, "lower80", scale("f.bands[0].low")), ...checksOf(item, "upper80", scale("f.bands[0].high")),
    ...checksOf(item, "lower95", scale("f.bands[1].low")), ...checksOf(item, "upper95", scale("f.bands[1].high")),
  ];
}

const testChecks = (item: Case, at: string): readonly Check[] => [
  ...checksOf(item, "statistic", () => `${at}.statistic`),
  ...checksOf(item, "pValue", () => `${at}.p`),
  ...(["1%", "5%", "10%"] as const).flatMap((level) => checksOf(item, "criticalValues", () => `${at}.critical["${level}"]`, (item.expected.criticalValues as Record<string, number>)[level])),
];

const writers: Readonly<Record<string, (item: Case) => Written>> = {
  acf: ofSeries((item) => {
    if (item.inputs.demean === false) throw new Unsupported("autocorrelations about zero");
    return checksOf(item, "acf", (i) => `acf(y, ${item.inputs.maxLag as number})[${i}]`);
  }),
  pacf: ofSeries((item) => checksOf(item, "pacf", (i) => `pacf(y, ${item.inputs.maxLag as number}, "levinson")[${i + 1}]`)),
  pacfOls: ofSeries((item) => checksOf(item, "pacf", (i) => `pacf(y, ${item.inputs.maxLag as number}, "regression")[${i + 1}]`)),
  ccf: (item) => {
    const lags = item.expected.lags as readonly number[];
    const value = item.expected.ccf as readonly number[];
    // The reference's lag k is corr(x[t + k], y[t]); the language's ccf(a, b)[k] has a at t with b at t + k.
    const tolerance = item.tolerance.abs ?? 0;
    const checks = lags.map((lag, i): Check => ({ field: "ccf", expected: value[i], within: tolerance, expression: lag >= 0 ? `ccf(z, y, ${item.inputs.maxLag as number})[${lag}]` : `ccf(y, z, ${item.inputs.maxLag as number})[${-lag}]` }));
    return write(`${seriesCells(item.series as string, item.transform, "y")}\n${seriesCells(item.inputs.with as string, item.inputs.withTransform as Case["transform"], "z")}`, checks);
  },
  portmanteau: ofSeries((item) => (["ljungBox", "boxPierce"] as const).flatMap((test) => {
    const at = (path: string) => (i: number): string => `${test}(y, ${(item.inputs.lags as readonly number[])[i]}).${path}`;
    const { statistic, pValue } = item.expected[test] as Readonly<Record<string, readonly (number | null)[]>>;
    // With the coefficients of a model taken off the degrees of freedom the p-value is another: diagnostics of a fit show that one.
    return [...checksOf(item, test, at("statistic"), statistic), ...(item.inputs.modelDf === 0 ? checksOf(item, test, at("p"), pValue) : [])];
  })),
  adf: ofSeries((item) => {
    const lags = item.inputs.autolag ? `lags: "${String(item.inputs.autolag).toLowerCase()}", maxLags: ${item.inputs.maxLag as number}` : `lags: ${item.inputs.lags as number}`;
    const at = `adf(y, {trend: "${trends[item.inputs.regression as string]}", ${lags}})`;
    return [...testChecks(item, at), ...checksOf(item, "lags", () => `${at}.lags`)];
  }),
  kpss: ofSeries((item) => testChecks(item, `kpss(y, {trend: "${trends[item.inputs.regression as string]}", bandwidth: ${item.inputs.lags as number}})`)),
  pp: ofSeries((item) => {
    const at = `phillipsPerron(y, {trend: "${trends[item.inputs.regression as string]}", bandwidth: ${item.inputs.lags as number}})`;
    return [...checksOf(item, "zTau", () => `${at}.statistic`), ...checksOf(item, "pValueTau", () => `${at}.p`)];
  }),
  jarqueBera: ofResiduals((item, x) => [...checksOf(item, "statistic", () => `jarqueBera(${x}).statistic`), ...checksOf(item, "pValue", () => `jarqueBera(${x}).p`)]),
  durbinWatson: ofResiduals((item, x) => checksOf(item, "statistic", () => `durbinWatson(${x})`)),
  archLM: ofResiduals((item, x) => [...checksOf(item, "lm", () => `archLM(${x}, ${item.inputs.lags as number}).statistic`), ...checksOf(item, "lmPValue", () => `archLM(${x}, ${item.inputs.lags as number}).p`)]),
  cumPeriodogram: ofResiduals((item, x) => {
    const test = `cumulativePeriodogram(${x}${item.inputs.taper === undefined ? "" : `, ${item.inputs.taper as number}`})`;
    return [...checksOf(item, "maxDeviation", () => `${test}.statistic`), ...checksOf(item, "critical95", () => `${test}.critical95`), ...checksOf(item, "cumulative", (i) => `${test}.cumulative[${i}]`)];
  }),
  mcleodLi: ofResiduals((item, x) => {
    const at = (path: string) => (i: number): string => `mcleodLi(${x}, ${(item.inputs.lags as readonly number[])[i]}).${path}`;
    return [...checksOf(item, "statistic", at("statistic")), ...checksOf(item, "pValue", at("p"))];
  }),
  interpolate: (item) => write(modelCells(item), [...checksOf(item, "value", (i) => `interpolate(m).mean[${i}]`), ...checksOf(item, "se", (i) => `interpolate(m).se[${i}]`)]),
  benchmark: (item) => {
    const { method, horizon, period } = item.inputs as { readonly method: string; readonly horizon: number; readonly period: number };
    const name = method === "mean" ? "average" : method;
    const cells = `${seriesCells(item.series as string, item.transform, "y")}\n\n\`\`\`forecast: f\nmodel: rule.${name}(y${method === "seasonalNaive" ? `, ${period}` : ""})\nhorizon: ${horizon}\n\`\`\`\n`;
    const inLogs = item.transform.includes("log");
    return write(cells, [...checksOf(item, "point", (i) => (inLogs ? `log(f.median[${i}])` : `f.median[${i}]`)), ...checksOf(item, "se", (i) => `f.se[${i}]`)]);
  },
  expSmoothing: (item) => {
    const { alpha, beta, gamma, damped, level0, trend0, seasonal0, seasonalType, horizon } = item.inputs;
    const weights = Object.entries({ alpha, beta, gamma, damped, level0, trend0, seasonal0, season: seasonalType === undefined ? undefined : { additive: "additive", multiplicative: "multiplicative", add: "additive", mul: "multiplicative" }[seasonalType as string] }).filter(([, value]) => value !== undefined).map(([key, value]) => `${key}: ${JSON.stringify(value)}`).join(", ");
    const at = `exponentialSmoothing(y, {${weights}}, ${horizon as number})`;
    return write(seriesCells(item.series as string, item.transform, "y"), [...checksOf(item, "point", (i) => `${at}.point[${i}]`), ...checksOf(item, "sse", () => `${at}.sse`), ...(item.expected.se === undefined ? [] : checksOf(item, "se", (i) => `${at}.se[${i}]`))]);
  },
  arimaLogLik: (item) => write(modelCells(item), [
    ...checksOf(item, "logLik", () => "m.logLikelihood"),
    ...checksOf(item, "nUsed", () => "m.n"),
    ...checksOf(item, "stdInnovFirst", (i) => `m.residuals.values.filter(v => v === v)[${i}]`),
  ]),
  arimaML: (item) => write(modelCells(item), [
    ...checksOf(item, "logLik", () => "m.logLikelihood"),
    ...checksOf(item, "sigma2", () => "m.sigma2"),
    ...checksOf(item, "k", () => "m.k"),
    ...checksOf(item, "nUsed", () => "m.n"),
    ...["aic", "aicc", "bic"].flatMap((field) => checksOf(item, field, () => `m.${field}`)),
    ...coefficients(item),
  ]),
  forecast: (item) => {
    const params = item.inputs.params ?? (item.expected.paramsUsed as Case["inputs"]["params"]);
    const cells = `${modelCells(item, item.inputs.model, params)}\n\n\`\`\`forecast: f\nmodel: m\nhorizon: ${item.inputs.horizon as number}\nlevels: [0.8, 0.95]\n\`\`\`\n`;
    return write(cells, forecastChecks(item));
  },
  css: (item) => {
    const observed = "m.residuals.values.filter(v => v === v)";
    return write(modelCells(item, item.inputs.model, item.inputs.params, "conditional"), [
      ...checksOf(item, "sigma2", () => "m.sigma2"),
      ...checksOf(item, "sumOfSquares", () => `m.sigma2 * ${item.expected.nUsed as number}`),
      ...checksOf(item, "residualsFirst", (i) => `${observed}[${i}]`),
      ...checksOf(item, "residualsLast", (i) => `${observed}.slice(-5)[${i}]`),
      ...coefficients(item),
    ]);
  },
  arYuleWalker: autoregression("yuleWalker", (item, p) => [
    ...checksOf(item, "sigma2", () => "m.sigma2"),
    ...checksOf(item, "sigma2DfAdjusted", () => `m.sigma2 * m.n / (m.n - ${p} - 1)`),
    ...checksOf(item, "se", (i) => `m.se.phi[${i}]`),
  ]),
  arBurg: autoregression("burg", (item, p) => [
    ...checksOf(item, "sigma2Levinson", () => "m.sigma2"),
    ...checksOf(item, "reflection", (i) => `pacf(y, ${p}, "burg")[${i + 1}]`),
  ]),
  arOls: autoregression("leastSquares", (item, p) => [
    ...checksOf(item, "intercept", () => "m.constant"),
    ...checksOf(item, "sigma2", () => "m.sigma2"),
    ...checksOf(item, "sigma2DfAdjusted", () => `m.sigma2 * (y.n - ${p}) / (y.n - ${2 * p + 1})`),
    ...checksOf(item, "se", (i) => `m.se.phi[${i}]`),
  ]),
  arOrderAic: (item) => {
    const { method, maxOrder } = item.inputs as { readonly method: string; readonly maxOrder: number };
    const aic = `range(0, ${maxOrder}, 1).map(k => y.n * log(fit({series: y, ar: k, method: "${method}"}).sigma2) + 2 * k + 2)`;
    const cells = `${seriesCells(item.series as string, item.transform, "y")}\n${cell("values", "order", { aic })}`;
    return write(cells, [...checksOf(item, "aicMinusMin", (i) => `order.aic[${i}] - min(order.aic)`), ...checksOf(item, "order", () => "order.aic.indexOf(min(order.aic))")]);
  },
  armaTheory: (item) => {
    const { ar, ma, sar, sma, period, sigma2, maxLag, freqs } = item.inputs as unknown as Readonly<Record<string, readonly number[]>> & { readonly period?: number; readonly sigma2?: number; readonly maxLag: number };
    const given = (parts: Readonly<Record<string, unknown>>): string => `{${Object.entries(parts).filter(([, v]) => v !== undefined).map(([key, v]) => `${key}: ${JSON.stringify(v)}`).join(", ")}}`;
    const m = given({ phi: ar ?? [], theta: ma, seasonalPhi: sar, seasonalTheta: sma, seasonLength: period, sigma2 });
    const side = (phi: unknown, seasonalPhi: unknown): string => given({ phi: phi ?? [], seasonalPhi, seasonLength: period });
    const full = (field: "arFull" | "maFull"): number => (item.expected[field] as readonly number[]).length;
    return write("", [
      // A pure autoregression's pi weights are its coefficients multiplied out, and a pure moving average's psi weights its own.
      ...checksOf(item, "arFull", (i) => `piWeights(${side(ar, sar)}, ${full("arFull")})[${i}]`),
      ...checksOf(item, "maFull", (i) => `psi(${given({ theta: ma ?? [], seasonalTheta: sma, seasonLength: period })}, ${full("maFull")})[${i + 1}]`),
      ...checksOf(item, "psi", (i) => `psi(${m}, ${maxLag})[${i}]`),
      ...checksOf(item, "pi", (i) => `piWeights(${m}, ${maxLag})[${i}]`),
      ...checksOf(item, "acovf", (i) => `longRun(${m}).variance * theoreticalAcf(${m}, ${maxLag})[${i}]`),
      ...checksOf(item, "acf", (i) => `theoreticalAcf(${m}, ${maxLag})[${i}]`),
      ...checksOf(item, "pacf", (i) => `theoreticalPacf(${m}, ${maxLag})[${i + 1}]`),
      ...checksOf(item, "spectrum", (i) => `theoreticalSpectrum(${m}, [${freqs.join(", ")}])[${i}]`),
      ...checksOf(item, "arRootModuli", (i) => `roots(${m}).ar[${i}].modulus`),
      ...checksOf(item, "maRootModuli", (i) => `roots(${m}).ma[${i}].modulus`),
    ]);
  },
  dieboldMariano: (item) => {
    const at = `dieboldMariano([${list(item.inputs.e1).join(", ")}], [${list(item.inputs.e2).join(", ")}], {horizon: ${item.inputs.h as number}, loss: "${item.inputs.power === 2 ? "squared" : "absolute"}"})`;
    return write("", [...checksOf(item, "hln", () => `${at}.statistic`), ...checksOf(item, "pValueTwoSided", () => `${at}.p`)]);
  },
  accuracy: (item) => {
    const given = (name: string): string => `[${list(item.inputs[name]).join(", ")}]`;
    return write("", [
      ...["mae", "rmse", "mape", "smape"].flatMap((measure) => checksOf(item, measure, () => `${measure}(${given("actual")}, ${given("forecast")})`)),
      ...checksOf(item, "mase", () => `mase(${given("actual")}, ${given("forecast")}, ${given("training")}, ${item.inputs.period as number})`),
    ]);
  },
};
