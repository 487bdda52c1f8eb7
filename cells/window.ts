// A sample window drawn on a series.

import { indexRange, type Series } from "../stdlib/index.ts";
import { OptionError, type Kind } from "./kind.ts";
import type { ControlPart } from "./parts/part.ts";

export interface WindowCell { readonly of: Series; readonly from?: string; readonly to?: string; readonly label?: string }
type WindowPart = Extract<ControlPart, { control: "window" }>;
interface Ends { readonly from: string; readonly to: string }

export const windowKind: Kind<WindowCell, WindowPart> = {
  name: "window",
  sentence: "A sample window drawn on a series, whose ends the reader can move.",
  options: {
    of: { type: "series", required: true, sentence: "The series that it is drawn on.", example: "crossings" },
    from: { type: "time", sentence: "First period of the sample; the series' first unless given.", example: "\"2015\"" },
    to: { type: "time", sentence: "Last period of the sample, included; the series' last unless given.", example: "\"2023\"" },
    label: { type: "text", sentence: "What readers see beside it; the cell's name unless given." },
  },
  body: "options",
  control: { keeps: ["from", "to"] },
  example: "of: crossings\nfrom: \"2015\"\nto: \"2023\"",
  run: (options, context) => {
    const { of: series, label = context.name ?? "" } = options;
    if (series.n === 0) throw new OptionError("of", "the series is empty; there is nothing to choose a window on");
    const kept = endsIn(series, options.from, options.to, true);
    const moved = settingOf(context.setting);
    const at = moved === null ? kept : endsIn(series, moved.from, moved.to, false);
    return { part: "control", control: "window", label, times: series.times, values: series.values, every: series.every, unit: series.unit, at, kept };
  },
  value: ({ at, times }) => ({ from: at.from, to: at.to, n: times.indexOf(at.to) - times.indexOf(at.from) + 1 }),
  show: (result) => [result],
};

/** The first and last period inside two times, as the series writes them. */
function endsIn(series: Series, from: string | null | undefined, to: string | null | undefined, text: boolean): Ends {
  try {
    const range = indexRange(series, from, to);
    return { from: series.times[range.from], to: series.times[range.to - 1] };
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    throw new OptionError(text ? faulty(series, from) : null, error.message);
  }
}

/** Which of the two ends is at fault. */
function faulty(series: Series, from: string | null | undefined): string {
  try {
    indexRange(series, from, undefined);
    return "to";
  } catch {
    return "from";
  }
}

/** A setting as the page sends it, {from, to}, or as the command line does: an ISO 8601 interval, ".." for an open end. */
function settingOf(setting: unknown): { readonly from?: string | null; readonly to?: string | null } | null {
  if (setting === undefined) return null;
  if (typeof setting === "string") {
    const ends = setting.split("/");
    if (ends.length !== 2) throw new OptionError(null, `the setting "${setting}" is no interval; write two times with a stroke between them, as in 2015-01/2023-12`);
    const [from, to] = ends.map((end) => (end === "" || end === ".." ? null : end));
    return { from, to };
  }
  if (typeof setting === "object" && setting !== null && ("from" in setting || "to" in setting)) return setting as { from?: string; to?: string };
  throw new OptionError(null, `the setting ${JSON.stringify(setting)} is no window; it takes two times, as in 2015-01/2023-12`);
}
