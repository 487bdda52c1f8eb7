// Descriptions of what a cell shows: data, not page elements. The page draws them, the host prints them.

/** One column of a chart's or table's data. Times are UTC milliseconds in a Float64Array, named by the field's own encoding. */
export type Column = Float64Array | readonly string[] | readonly (number | string | boolean | null)[];
export type Columns = Readonly<Record<string, Column>>;

/** A Vega-Lite view. `spec` holds no data and no colours: named data sets stand in `data`, marks name a `style` of the theme.
 *  Two charts whose `spec` are equal as JSON share one compiled view; a moved control changes `data` and, where it must, `params`.
 *  Styles: "sample" (observed data used), "heldOut" (observed, not used), "model" (fitted or forecast line), "band" (interval),
 *  "limit" (reference line or significance limit), "mark" (stems, bars, points of a statistic), "outside" (statistic outside its limits), "guide" (zero lines, season marks), "label". */
export interface ChartPart {
  readonly part: "chart";
  readonly title: string;
  /** A sentence that states the finding, for a reader who does not see the picture. */
  readonly alt: string;
  readonly spec: Readonly<Record<string, unknown>>;
  readonly data: Readonly<Record<string, Columns>>;
  readonly params?: Readonly<Record<string, number | string | boolean>>;
  /** Height in pixels of the whole picture; the page gives the width. */
  readonly height: number;
  /** Full-precision data behind the picture where `data` was thinned for drawing; what "data" in the menu gives. */
  readonly full?: Readonly<Record<string, Columns>>;
  /** What the reader may pick to be shown, without anything being computed; `data` holds what is shown at `at`. */
  readonly pick?: Pick;
}

/** One of a few views of a chart, in the order of a scale that the reader moves along. */
export interface Pick {
  /** What is picked: "Origin". */
  readonly label: string;
  /** Where it stands at first. */
  readonly at: number;
  readonly among: readonly {
    readonly label: string;
    /** What is shown then, in words. */
    readonly words: string;
    /** Data sets that take the place of the chart's of the same names. */
    readonly data: Readonly<Record<string, Columns>>;
  }[];
}

export interface TableColumn {
  readonly title: string;
  readonly align?: "left" | "right";
  /** d3-format pattern for numbers; NaN is printed as a dash. */
  readonly format?: string;
  readonly unit?: string;
}

export interface TablePart {
  readonly part: "table";
  readonly title?: string;
  readonly columns: readonly TableColumn[];
  readonly rows: readonly (readonly (number | string | boolean | null)[])[];
  /** Index of a row to be marked as chosen, with the word that says so to a screen reader ("best"). */
  readonly marked?: readonly { readonly row: number; readonly word: string }[];
  readonly note?: string;
}

/** TeX, and the same in plain words or symbols for text output and screen readers. */
export interface EquationPart { readonly part: "equation"; readonly title?: string; readonly tex: string; readonly text: string }

export interface TextPart { readonly part: "text"; readonly text: string; readonly tone?: "plain" | "caution" | "note" }

/** The state of one claim. `holds` null = undecided. */
export interface ClaimsPart { readonly part: "claims"; readonly claims: readonly { readonly claim: string; readonly holds: boolean | null; readonly message?: string }[] }

/** A few labelled figures in one line. */
export interface FiguresPart { readonly part: "figures"; readonly figures: readonly { readonly label: string; readonly value: number | string; readonly format?: string; readonly unit?: string }[] }

export type ControlPart =
  | { readonly part: "control"; readonly control: "slider"; readonly label: string; readonly from: number; readonly to: number; readonly step: number; readonly at: number; readonly kept: number }
  | { readonly part: "control"; readonly control: "choice"; readonly label: string; readonly among: readonly (string | number | boolean)[]; readonly at: string | number | boolean; readonly kept: string | number | boolean }
  | { readonly part: "control"; readonly control: "switch"; readonly label: string; readonly at: boolean; readonly kept: boolean }
  | { readonly part: "control"; readonly control: "window"; readonly label: string; readonly times: readonly string[]; readonly values: Float64Array; readonly every: string | null; readonly unit: string; readonly at: { readonly from: string; readonly to: string }; readonly kept: { readonly from: string; readonly to: string } };

/** A detail waits, folded, below what carries the cell's finding. */
export type Part = (ChartPart | TablePart | EquationPart | TextPart | ClaimsPart | FiguresPart | ControlPart) & { readonly detail?: true };

/** The same parts as details. */
export function details(parts: readonly Part[]): readonly Part[] {
  return parts.map((part) => ({ ...part, detail: true as const }));
}
