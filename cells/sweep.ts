// The kind that asks what hangs on a control: it recomputes numbers for each of the control's values, off to the side.

import { OptionError, type Kind, type OptionTable, type RunContext } from "./kind.ts";
import { printed, sweepParts } from "./parts/sweepParts.ts";

export interface SweepCell {
  /** A control's name. */
  readonly over: string;
  readonly values?: readonly unknown[];
  /** Not evaluated: its source is in `context.source`. */
  readonly measure?: unknown;
}

export interface SweepRow {
  readonly value: unknown;
  /** The control's present value. */
  readonly present: boolean;
  /** Why there is no number here; null where there is. */
  readonly failed: string | null;
  readonly [measure: string]: unknown;
}

export interface Sweep {
  readonly over: string;
  readonly at: unknown;
  readonly measures: readonly string[];
  readonly rows: readonly SweepRow[];
  /** Values asked for; more than the rows where the work was ended early. */
  readonly asked: number;
}

const mostValues = 1000;
const reserved = new Set(["value", "present", "failed"]);

const sweepOptions: OptionTable = {
  over: { type: "text", required: true, taken: "name", sentence: "The control to move: its name, not its value.", example: "order" },
  values: { type: "list", sentence: "The values to try; without this option, those the control offers.", example: "range(0, 5)" },
  measure: { type: "any", required: true, taken: "expression", sentence: "A number, word or truth that depends on the control, or several as {name: expression}.", example: "{aicc: airline.aicc}" },
};

/** Recomputes what depends on a control for each of its values; the notebook on the page is left as it is. */
export const sweep: Kind<SweepCell, Sweep> = {
  name: "sweep",
  sentence: "Recomputes what depends on a control for each of its values, off to the side, and draws the numbers against it.",
  options: sweepOptions,
  body: "options",
  example: "over: order\nmeasure: {aicc: airline.aicc}",
  run: (options, context) => runSweep(options, context),
  show: result => sweepParts(result),
};

async function runSweep(options: SweepCell, context: RunContext): Promise<Sweep> {
  const { over } = options;
  const expression = context.source.measure ?? (typeof options.measure === "string" ? options.measure : undefined);
  if (expression === undefined || expression.trim() === "") throw new OptionError("measure", "measure needs an expression to compute for each value, such as airline.aicc");
  const control = context.control(over);
  const values = options.values ?? control.values;
  if (!Array.isArray(values) || values.length === 0) throw new OptionError("values", `there are no values to try for ${over}; give some, such as values: [1, 2, 3]`);
  if (values.length > mostValues) throw new OptionError("values", `${values.length} values of ${over} are too many to recompute; give fewer, at most ${mostValues}`);
  const found: { value: unknown; measures: Readonly<Record<string, unknown>> | null; failed: string | null }[] = [];
  for (const [i, value] of values.entries()) {
    if (i > 0 && context.stopped()) break;
    context.progress(i, values.length, `${over} = ${printed(value)}`);
    // The work of one value may be long: what overtakes this cell is let in before each.
    await context.breathe();
    found.push(await oneValue(context, over, value, expression));
  }
  context.progress(found.length, values.length);
  const measures = Array.from(new Set(found.flatMap(one => Object.keys(one.measures ?? {}))));
  if (measures.length === 0) throw new OptionError("measure", `no value of ${over} gave a result. The first said: ${found[0].failed ?? "nothing"}`);
  return {
    over, at: control.at, measures, asked: values.length,
    rows: found.map(({ value, measures: got, failed }) => ({
      ...Object.fromEntries(measures.map(name => [name, got?.[name] ?? NaN])), value, present: same(value, control.at), failed,
    })),
  };
}

async function oneValue(context: RunContext, over: string, value: unknown, expression: string): Promise<{ value: unknown; measures: Readonly<Record<string, unknown>> | null; failed: string | null }> {
  try {
    return { value, measures: measuresOf(await context.recompute(over, value, expression)), failed: null };
  } catch (error) {
    if (error instanceof OptionError) throw error;
    if (context.signal.aborted) throw error;
    return { value, measures: null, failed: error instanceof Error ? error.message : String(error) };
  }
}

/** A single number is called "measure"; an object gives its own names. @throws OptionError where it is neither */
function measuresOf(result: unknown): Readonly<Record<string, unknown>> {
  if (isShown(result)) return { measure: result };
  if (typeof result === "object" && result !== null && !Array.isArray(result)) {
    const entries = Object.entries(result);
    const wrong = entries.find(([, value]) => !isShown(value));
    if (entries.length > 0 && wrong === undefined) {
      const taken = entries.find(([name]) => reserved.has(name));
      if (taken) throw new OptionError("measure", `"${taken[0]}" names a column of the sweep itself; call the measure something else`);
      return result as Readonly<Record<string, unknown>>;
    }
    if (wrong) throw new OptionError("measure", `the measure "${wrong[0]}" gives ${whatIs(wrong[1])}; choose one number, word or truth in it, such as .aicc or .p`);
  }
  throw new OptionError("measure", `the measure gives ${whatIs(result)}; it has to be a number, a word or a truth, or an object of them such as {aicc: airline.aicc}`);
}

function isShown(value: unknown): boolean {
  return typeof value === "number" || typeof value === "boolean" || typeof value === "string";
}

function whatIs(value: unknown): string {
  if (value === null || value === undefined) return "nothing";
  if (Array.isArray(value) || ArrayBuffer.isView(value)) return "a list";
  return typeof value === "object" ? "an object" : `a ${typeof value}`;
}

function same(a: unknown, b: unknown): boolean {
  if (typeof a === "number" && typeof b === "number") return Math.abs(a - b) <= 1e-9 * Math.max(1, Math.abs(a), Math.abs(b));
  return printed(a) === printed(b);
}
