// The text of a first notebook: an analyst's usual argument about one series, section by section.

/** What the `load` cell says. */
export interface LoadText {
  /** Name of the series in the notebook, an identifier. */
  readonly name: string;
  /** The data file, as the notebook names it. */
  readonly file: string;
  /** Column of the values, where the file has several. */
  readonly column: string | null;
  readonly unit: string | null;
  /** What comes first in dates, where the file leaves it open. */
  readonly order: "day-month" | "month-day" | null;
  /** The rows are numbered, whatever times the file has. */
  readonly numbered: boolean;
}

export interface Recognised extends LoadText {
  readonly otherColumns: readonly string[];
  /** Columns of the times. */
  readonly timeColumns: readonly string[];
  readonly every: string | null;
  /** Days a week with rows, where some never have any; then the rows are numbered. */
  readonly week: number | null;
  readonly notes: readonly string[];
}

export interface Plan {
  readonly logs: boolean;
  /** Order of plain differences, 0 or 1. */
  readonly difference: number;
  readonly seasonalDifference: boolean;
  /** Whether a test could say that a plain difference is needed, or is not. */
  readonly levelTested: boolean;
  /** Periods a season; 0 where there is none to model. */
  readonly season: number;
  /** Periods a season for the naive rule: longer ones too. */
  readonly cycle: number;
  readonly lags: number;
  readonly horizon: number;
  readonly origins: number;
}

export interface Orders { readonly ar: number; readonly ma: number; readonly seasonalAr: number; readonly seasonalMa: number }

export interface Section { readonly id: string; readonly text: string; /** Sections without which this one makes no sense. */ readonly needs: readonly string[] }

const every: Readonly<Record<string, readonly [one: string, many: string]>> = {
  P1Y: ["year", "years"], P3M: ["quarter", "quarters"], P1M: ["month", "months"], P1W: ["week", "weeks"], P1D: ["day", "days"], PT1H: ["hour", "hours"],
  PT30M: ["half hour", "half hours"], PT15M: ["quarter of an hour", "quarters of an hour"], PT1M: ["minute", "minutes"],
};

/** Stands for a number whose digits are chosen when it is known. */
export const anyForm = "#";

/** Four significant digits at least, thousands grouped.
 *  @example fourDigits(11294.13) // "11,294" */
export function fourDigits(value: number): string {
  const decimals = value === 0 || !Number.isFinite(value) ? 0 : Math.max(0, Math.min(8, 3 - Math.floor(Math.log10(Math.abs(value)))));
  return value.toLocaleString("en-US", { minimumFractionDigits: decimals, maximumFractionDigits: decimals });
}

/** A cell of the notebook. */
function cell(head: string, ...options: readonly (string | null)[]): string {
  return ["```" + head, ...options.filter((line) => line !== null), "```"].join("\n");
}

function periodWords(spacing: string | null): readonly [one: string, many: string] { return every[spacing ?? ""] ?? ["period", "periods"]; }

/** @example spacingWords({ every: "PT1H", ... }) // "one value an hour" */
export function spacingWords({ every: spacing, week }: Pick<Recognised, "every" | "week">): string {
  if (week !== null) return `numbered values, ${week} a week`;
  if (spacing === null) return "numbered values";
  const [one] = periodWords(spacing);
  return !(spacing in every) ? `one value every ${spacing}` : `one value ${one.includes(" ") ? "every" : one === "hour" ? "an" : "a"} ${one}`;
}

export function loadCell({ name, file, column, unit, order, numbered }: LoadText): string {
  const given = (option: string, text: string | null): string | null => (text === null ? null : `${option}: ${JSON.stringify(text)}`);
  return cell(`load: ${name}`, given("file", file), given("value", column), given("order", order), given("start", numbered ? "1" : null), given("unit", unit));
}

export function steadyCell(name: string, plan: Plan, window: string | null): string {
  const steps = [plan.logs ? "log" : null, plan.difference > 0 ? "difference(1)" : null, plan.seasonalDifference ? `difference(${plan.season})` : null].filter((step) => step !== null);
  return cell("transform: steady", `series: ${name}`, window === null ? null : `window: ${window}`, `steps: [${steps.join(", ")}]`);
}

export function ordersCell(plan: Plan): string {
  return cell("compare: orders", "series: steady", "ar: 2", "ma: 2", plan.season > 0 ? `season: {length: ${plan.season}, ar: 1, ma: 1}` : null);
}

/** @param title  the notebook's heading */
export function sections(title: string, data: Recognised, plan: Plan, orders: Orders): readonly Section[] {
  const { name } = data, periods = periodWords(data.every), [, many] = periods;
  const season = plan.season > 0 ? `season: {length: ${plan.season}, ar: ${orders.seasonalAr}, ma: ${orders.seasonalMa}}` : null;
  const rules = [["the value before", `rule.naive(${name})`], ...(plan.cycle > 0 ? [["one season before", `rule.seasonalNaive(${name}, ${plan.cycle})`]] : []), ["straight on", `rule.drift(${name})`]];
  return [
    { id: "data", needs: [], text: [
      `# ${title}`, "", `This first notebook was written from \`${data.file}\`. Everything in it can be changed: the text is yours.`, "", "## The data", "",
      loadCell(data), "", `${recognisedWords(data)} The series has [0](=${name}.n) ${many}, from [-](=${name}.start) to [-](<=${name}.times[${name}.n - 1]>).${data.notes.length > 0 ? ` ${data.notes.map(sentence).join(" ")}` : ""}`, "",
      cell("window: sample", `of: ${name}`, `label: "Sample"`), "", "Drag the ends of the window to leave early or late data out; all that follows uses the window.",
    ].join("\n") },
    { id: "steady", needs: ["data"], text: ["## To stationarity", "", stepsWords(name, plan, periods), "", steadyCell(name, plan, "sample")].join("\n") },
    { id: "tests", needs: ["steady"], text: [cell("stationarity: tests", "series: steady"), "",
      "The augmented Dickey-Fuller test, whose null hypothesis is a unit root, gives [0.00](=tests.adf.statistic) (p [<0.001](=tests.adf.p)); the KPSS test, whose null hypothesis is stationarity, gives [0.00](=tests.kpss.statistic) (p [0.00](=tests.kpss.p))."].join("\n") },
    { id: "shape", needs: ["steady"], text: ["## Autocorrelations", "", cell("correlogram: shape", "series: steady", `lags: ${plan.lags}`), "",
      "At lag 1 the autocorrelation is [0.00](=shape.acf[1]) and the partial autocorrelation [0.00](=shape.pacf[1]). About one lag in twenty stands outside its band by chance."].join("\n") },
    { id: "orders", needs: ["steady"], text: ["## A model", "", ordersCell(plan), "",
      "Of [0](=orders.models.length) combinations of orders, the corrected Akaike criterion puts [-](=orders.best.label) first. Differences below two are no reason to prefer one model to another."].join("\n") },
    { id: "fit", needs: ["steady"], text: [cell("slider: p", "from: 0", `to: ${Math.max(4, orders.ar)}`, `at: ${orders.ar}`, `label: "Autoregressive order p"`), "", cell("slider: q", "from: 0", `to: ${Math.max(4, orders.ma)}`, `at: ${orders.ma}`, `label: "Moving-average order q"`), "",
      cell("fit: model", "series: steady", "ar: p", "ma: q", season), "", "The model leaves a variance of [#](=model.sigma2) one step ahead; its corrected Akaike criterion is [0.0](=model.aicc)."].join("\n") },
    { id: "diagnostics", needs: ["fit"], text: [cell("diagnostics: leftover", "model: model", `lags: ${plan.lags}`), "",
      `For the residuals the Ljung-Box test over [0](=leftover.ljungBox.lags) lags gives p = [0.00](=leftover.ljungBox.p).`].join("\n") },
    { id: "contest", needs: ["fit"], text: ["## Against naive rules", "",
      cell("compare: contest", `models: {"the model": model, ${rules.map(([label, rule]) => `${JSON.stringify(label)}: ${rule}`).join(", ")}}`, `origins: ${plan.origins}`, `horizon: ${plan.horizon}`), "",
      `Each was made to forecast from ${plan.origins} held-out origins, with the data up to there and nothing else. The smallest mean absolute scaled error, [0.00](=contest.best.mase), is that of [-](=contest.best.label).`].join("\n") },
    { id: "forecast", needs: ["fit"], text: ["## The forecast", "", cell("forecast: ahead", "model: model", `horizon: ${plan.horizon}`, "levels: [0.5, 0.9]"), "",
      `For [-](=ahead.times[0]) the model puts the median at [#](=ahead.median[0]), and its 90% band runs from [#](=ahead.bands[1].low[0]) to [#](=ahead.bands[1].high[0]). The bands hold if the model does.`].join("\n") },
  ];
}

/** Conclusions that may be guarded, each with the section that it needs. */
export const conclusions: readonly { readonly claim: string; readonly condition: string; readonly needs: string }[] = [
  { claim: "A unit root is rejected (ADF, 5%)", condition: "tests.adf.p < 0.05", needs: "tests" },
  { claim: "Nothing speaks against stationarity (KPSS, 5%)", condition: "tests.kpss.p >= 0.05", needs: "tests" },
  { claim: "Nothing speaks against noise in the residuals (Ljung-Box, 5%)", condition: "leftover.ljungBox.p > 0.05", needs: "diagnostics" },
  { claim: "No naive rule has a smaller error at the held-out origins", condition: `contest.best.label === "the model"`, needs: "contest" },
  { claim: "The model beats the naive rules by more than chance (5%)", condition: `contest.best.label === "the model" && contest.best.beatsNaive === "yes"`, needs: "contest" },
];

export function claimsSection(held: readonly { readonly claim: string; readonly condition: string }[], fallen: readonly string[]): string {
  const parts = ["## What must hold", ""];
  if (held.length > 0) parts.push(cell("claims:", ...held.map(({ claim, condition }) => `${JSON.stringify(claim)}: ${condition}`)), "");
  if (fallen.length > 0) parts.push(`What follows is not shown by these data, and so it is not claimed: ${fallen.map((claim) => lowered(claim)).join("; ")}.`, "");
  if (held.length > 0) parts.push("Where one of these breaks when data are added, `lagbook verify` says so and ends with 1.");
  return parts.join("\n");
}

const left: Readonly<Record<string, string>> = { steady: "steps", tests: "tests", shape: "autocorrelations", orders: "comparison of orders", fit: "model", diagnostics: "residuals", contest: "comparison with naive rules", forecast: "forecast" };

/** What these data cannot answer, each with the reason. */
export function leftOutSection(why: ReadonlyMap<string, string>): string {
  const reasons = [...new Set(why.values())].map((reason) => {
    const what = [...why].filter(([, each]) => each === reason).map(([id]) => left[id] ?? id);
    return `- No ${what.length > 1 ? `${what.slice(0, -1).join(", ")} or ${what.at(-1) ?? ""}` : what[0]}: ${sentence(reason)}`;
  });
  return ["## Left out", "", "These data do not answer everything that a first notebook asks:", "", ...reasons].join("\n");
}

function recognisedWords(data: Recognised): string {
  const { column, otherColumns, timeColumns, file, week, order } = data, columns = timeColumns.map((name) => `\`${name}\``).join(" and ");
  const values = column === null ? "the column of values" : `the column \`${column}\``;
  const times = timeColumns.length === 0 ? "no column of times, so the rows are only numbered" : week === null ? `times in ${columns}, ${spacingWords(data)}`
    : `dates in ${columns}, and rows for only ${week} days of the week: the rows are numbered, so that a week has ${week} of them and no day without business counts as a gap`;
  const which = order === null ? "" : ` Its dates may be read with the day or the month first; only with the ${order === "day-month" ? "day" : "month"} first are they evenly spaced, and \`order\` says so.`;
  const others = otherColumns.length === 0 ? "" : ` It also has ${otherColumns.map((name) => `\`${name}\``).join(", ")}: a \`load\` cell whose \`value\` names ${otherColumns.length === 1 ? "it" : "one of them"} makes a series of it, which \`fit\` can take as a regressor.`;
  return `\`${file}\` has ${times}; ${values} is the series.${which}${others}`;
}

function stepsWords(name: string, { logs, difference, seasonalDifference, season, levelTested }: Plan, [one, many]: readonly [one: string, many: string]): string {
  const parts: string[] = [];
  if (logs) parts.push(`Guerrero's measure of how the spread goes with the level, [0.00](<=estimateLambda(${name}, "guerrero")>), is nearer to 0 (logarithms) than to 1 (the values as they are): logarithms are used.`);
  if (seasonalDifference) parts.push(`The season repeats after ${season} ${many}: a difference against the same ${one} one season before takes it out.`);
  if (difference > 0) parts.push(`The KPSS test rejects a steady level (5%): a difference against the ${one} before takes out its wandering.`);
  const steps = parts.length;
  if (!levelTested) parts.push("Whether the level wanders was not tested, since the KPSS test gives no answer for these data: look at the plot and the autocorrelations.");
  else if (steps === 0) parts.push("The KPSS test does not reject a steady level (5%), and no step is taken. Add steps here to try some.");
  if (steps > 0) parts.push("Forecasts come back through these steps to the units of the data.");
  return parts.join(" ");
}

function sentence(text: string): string { const whole = text.trim(); return /[.!?]$/.test(whole) ? whole : `${whole}.`; }

function lowered(text: string): string { return text.charAt(0).toLowerCase() + text.slice(1); }
