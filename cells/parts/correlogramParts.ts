// What a correlogram shows: what stands out, both correlations on one lag axis, the portmanteau tests, the suggestion.

import type { Correlogram, OrderTable, PrewhitenedCcf } from "../../stdlib/index.ts";
import { lagChart, type LagPanel } from "./lagChart.ts";
import { orderChart } from "./orderChart.ts";
import { details } from "./part.ts";
import type { Part, TablePart, TextPart } from "./part.ts";
import { lagsInWords, percent, pText } from "./words.ts";

type Cross = PrewhitenedCcf & { readonly of: string; readonly name: string; readonly toTry: string | null };
type Shown = Correlogram & { readonly of: string; readonly cross: Cross | null; readonly mixed: { readonly extended: OrderTable; readonly canonical: OrderTable } | null; readonly theory: { readonly label: string; readonly acf: Float64Array; readonly pacf: Float64Array } | null };

export function correlogramParts(result: Shown): readonly Part[] {
  if (result.status === "unavailable") return [{ part: "text", tone: "caution", text: result.sentence }];
  const own: readonly Part[] = [
    { part: "text", text: result.sentence },
    lagChart({
      title: `Correlations of ${result.of} with its own past`, alt: altOf(result), season: result.seasonLength ?? 0,
      panels: [panel("autocorrelation", result, "acf"), panel("partial autocorrelation", result, "pacf")],
    }),
    startText(result),
    ...(result.theory === null ? [] : [{ part: "text" as const, tone: "note" as const, text: `The line is what ${result.theory.label} would give in a long series.` }]),
  ];
  const tables = details([...mixedParts(result), portmanteauTable(result)]), notes = result.notes.map((text): TextPart => ({ part: "text", tone: "note", text }));
  // Where a second series was given, the question is about both; the first one's own past waits below.
  return result.cross === null ? [...own, ...tables, ...notes] : [...crossParts(result.cross, result.of), ...details([...own, ...notes]), ...tables];
}

/** Which leads, by how much, and the regressor to try; lags to both sides of 0. */
function crossParts(cross: Cross, of: string): readonly Part[] {
  if (cross.status === "unavailable") return [{ part: "text", tone: "caution", text: cross.sentence }];
  const reach = (cross.lags.length - 1) / 2, note = (text: string): TextPart => ({ part: "text", tone: "note", text });
  return [
    { part: "text", text: cross.sentence },
    lagChart({
      title: `Cross-correlations of ${cross.of} with ${of}, after prewhitening`, alt: cross.sentence, season: 0, guides: [0], lagTitle: `lag (periods); right of 0 ${cross.name} comes first`,
      panels: [{ title: "cross-correlation", from: -reach, values: cross.ccf, band: Float64Array.from(cross.ccf, () => cross.band) }],
    }),
    ...(cross.toTry === null ? [] : [note(cross.toTry)]),
    note(`An autoregression of order ${cross.order}, estimated from ${cross.of}, was taken out of both, so that memory in each does not pass for a connection; ${cross.n} pairs are left.`),
    ...cross.notes.map(note),
  ];
}

/** Lag 0 is 1 by definition and would only flatten the picture: panels start at lag 1. */
function panel(title: string, result: Shown, which: "acf" | "pacf"): LagPanel {
  return {
    title, from: 1, values: result[which].slice(1), band: result.band[which].slice(1),
    ...(result.theory === null ? {} : { theory: result.theory[which].slice(1, result.lags + 1) }),
  };
}

function altOf(result: Shown): string {
  const say = (lags: readonly number[], what: string): string => lags.length === 0 ? `no ${what} is outside the ${percent(result.level)} band` : `the ${what}s at lag${lags.length > 1 ? "s" : ""} ${lagsInWords(lags)} are outside the ${percent(result.level)} band`.replace(/s at lag (\S+) are/, " at lag $1 is");
  return `Lags 1 to ${result.lags}: ${say(result.outside.acf, "autocorrelation")}; ${say(result.outside.pacf, "partial autocorrelation")}.`;
}

/** The orders as options of a fit, ready to be typed. */
function startText(result: Shown): TextPart {
  const { ar, ma, season } = result.suggests;
  if (result.differenceFirst !== null) return { part: "text", tone: "note", text: `No orders are read yet: try the step difference(${result.differenceFirst === "season" ? result.seasonLength : 1}) in a transform, and a correlogram of what it leaves.` };
  if (ar + ma === 0 && season === null) return { part: "text", tone: "note", text: "Nothing here asks for AR or MA terms." };
  const seasonal = season === null ? "" : `, season: {${[season.ar > 0 ? `ar: ${season.ar}` : "", season.ma > 0 ? `ma: ${season.ma}` : ""].filter(Boolean).join(", ")}}`;
  return { part: "text", tone: "note", text: `A fit could begin with ar: ${ar}, ma: ${ma}${seasonal}. That is a suggestion from a rule of thumb: compare it with its neighbours before relying on it.` };
}

/** Tables for mixed orders: shaded is what chance would give; the corner of the shaded field is read as the orders. */
function mixedParts(result: Shown): readonly Part[] {
  if (result.mixed === null) return [];
  const { extended, canonical } = result.mixed;
  return [
    { part: "text", text: `For mixed orders: ${extended.sentence} ${canonical.sentence} ${together(result.mixed)}` },
    orderChart("Extended autocorrelations by orders (Tsay and Tiao 1984); shaded: within chance", extended.sentence, extended),
    orderChart("Smallest canonical correlations, p-values by orders (Tsay and Tiao 1985); shaded: above 0.05", canonical.sentence, canonical),
  ];
}

function together({ extended, canonical }: NonNullable<Shown["mixed"]>): string {
  const [a, b] = [extended.suggests, canonical.suggests];
  if (a === null || b === null) return "";
  return a.ar === b.ar && a.ma === b.ma ? "The two tables agree." : "The two tables point to different orders: fit both and compare them.";
}

function portmanteauTable(result: Shown): TablePart {
  return {
    part: "table", title: "Lags taken together (Ljung and Box)",
    columns: [{ title: "up to lag", align: "right", format: "d" }, { title: "statistic", align: "right", format: ",.2f" }, { title: "p", align: "right" }, { title: "reading" }],
    rows: result.portmanteau.map(row => [
      row.lag, row.statistic, row.df === null ? "none left" : pText(row.p).replace(/^p (= )?/, ""),
      row.df === null ? "no degrees of freedom left" : row.p < 1 - result.level ? "larger than chance would make them" : "no larger than chance would make them",
    ]),
    note: "The null hypothesis: no autocorrelation up to this lag.",
  };
}
