// A small language for the engine's tests: kinds that count their runs and can be slow, stopped or faulty.

import { checkOptions } from "../../../cells/check.ts";
import { OptionError } from "../../../cells/kind.ts";
import type { ClaimOutcome, CodeBody, Kind, Language } from "../../../cells/kind.ts";

type AnyKind = Kind<never, unknown>;

interface SliderResult { readonly at: number; readonly kept: number; readonly from: number; readonly to: number; readonly step: number }

const slider: Kind<{ from: number; to: number; step: number; at?: number }, SliderResult> = {
  name: "slider", sentence: "A number.", body: "options", control: { keeps: ["at"] }, example: "from: 0\nto: 3",
  options: {
    from: { type: "number", sentence: "least value", required: true }, to: { type: "number", sentence: "greatest value", required: true },
    step: { type: "number", sentence: "step", default: 1 }, at: { type: "number", sentence: "where it stands" },
  },
  run: (options, context) => {
    const kept = options.at ?? options.from;
    const setting = context.setting as number | undefined;
    if (setting !== undefined && (setting < options.from || setting > options.to)) throw new OptionError(null, `the setting is ${setting}, outside ${options.from} to ${options.to}`);
    return { at: setting ?? kept, kept, from: options.from, to: options.to, step: options.step };
  },
  show: (result) => [{ part: "control", control: "slider", label: "s", ...result }],
  value: (result) => result.at,
};

const double: Kind<{ of: number; slow?: number }, { of: number; twice: number }> = {
  name: "double", sentence: "Twice a number.", body: "options", callable: true, example: "of: 2",
  options: { of: { type: "number", sentence: "the number", required: true, max: 40 }, slow: { type: "integer", sentence: "slices of work" } },
  run: (options, context) => {
    if (options.of === 14) throw new RangeError("of is 14, and 14 is refused");
    if (options.of === 13) throw new OptionError("of", "13 cannot be doubled");
    if (options.slow === undefined) return { of: options.of, twice: 2 * options.of };
    return slowly(options.slow, context).then(() => ({ of: options.of, twice: 2 * options.of }));
  },
  show: (result) => [{ part: "text", text: `${result.twice}` }],
};

/** Counts up to a number in slices; asked to end early, it gives how far it came. Counts that it remembers take no time. */
const count: Kind<{ to: number; heeds: boolean }, { reached: number; made: number }> = {
  name: "count", sentence: "Counts.", body: "options", example: "to: 3", 
  options: { to: { type: "integer", sentence: "how far", required: true }, heeds: { type: "boolean", sentence: "whether it does as it is asked", default: true } },
  run: async (options, context) => {
    let reached = 0, made = 0;
    while (reached < options.to && !(context.stopped() && options.heeds)) {
      reached = context.recall(`after ${reached}`, () => { made += 1; return reached + 1; });
      context.progress(reached, options.to);
      await context.breathe();
      if (made > 0) await new Promise((resolve) => { setTimeout(resolve, 2); });
    }
    return { reached, made };
  },
  show: (result) => [{ part: "text", text: `${result.reached}` }],
};

async function slowly(slices: number, context: { breathe(): Promise<void>; progress(done: number, total: number): void }): Promise<void> {
  for (let i = 0; i < slices; i += 1) {
    context.progress(i, slices);
    const until = performance.now() + 7;
    while (performance.now() < until);
    await context.breathe();
  }
}

const values: Kind<Record<string, unknown>, Record<string, unknown>> = {
  name: "values", sentence: "Named expressions.", body: "names", options: {}, example: "a: 1", run: (options) => options, show: () => [],
};

const claims: Kind<Record<string, ClaimOutcome>, Record<string, ClaimOutcome>> = {
  name: "claims", sentence: "Conclusions.", body: "claims", options: {}, example: '"one is one": 1 === 1', run: (options) => options,
  show: (result) => [{ part: "claims", claims: Object.entries(result).map(([claim, outcome]) => ({ claim, ...outcome })) }],
};

const script: Kind<CodeBody, Readonly<Record<string, unknown>>> = {
  name: "script", sentence: "Code.", body: "code", options: {}, example: "export const a = 1;", run: (options, context) => context.importCode(options.source, options.inputs), show: () => [],
};

const load: Kind<{ file: string }, { text: string }> = {
  name: "load", sentence: "Reads a file.", body: "options", options: { file: { type: "text", sentence: "the file", required: true } }, example: 'file: "a"',
  run: async (options, context) => { context.note("read"); return { text: new TextDecoder().decode(await context.read(options.file)) }; }, show: () => [],
};

const sweep: Kind<{ over: string; measure: string }, { rows: unknown[] }> = {
  name: "sweep", sentence: "Recomputes.", body: "options", example: "over: a\nmeasure: b",
  options: { over: { type: "text", sentence: "a control", required: true, taken: "name" }, measure: { type: "any", sentence: "what", required: true, taken: "expression" } },
  run: async (options, context) => {
    const rows: unknown[] = [];
    for (const value of context.control(options.over).values) rows.push({ value, measure: await context.recompute(options.over, value, options.measure) });
    return { rows };
  },
  show: () => [],
};

export const fake: Language = {
  kinds: [slider, double, count, values, claims, script, load, sweep] as unknown as readonly AnyKind[],
  library: [
    { name: "sum", signature: "sum(list)", sentence: "Sum.", topic: "plain", call: (list) => Array.from(list as ArrayLike<number>).reduce((a, b) => a + b, 0) },
    { name: "log", signature: "log(x)", sentence: "Logarithm.", topic: "plain", call: (x) => (x === undefined ? { step: "log" } : Math.log(x as number)) },
    { name: "difference", signature: "difference(lag)", sentence: "Step.", topic: "steps", call: (lag) => ({ step: "difference", lag }) },
    { name: "floats", signature: "floats(n)", sentence: "Typed.", topic: "plain", call: (n) => Float64Array.from({ length: n as number }, (_, i) => i / 2) },
    { name: "fails", signature: "fails()", sentence: "Throws.", topic: "plain", call: () => { throw new RangeError("fails: n is 0, expected at least 1"); } },
    { name: "rule.naive", signature: "rule.naive(x)", sentence: "Rule.", topic: "rules", call: (x) => ({ rule: "naive", x }) },
  ],
  constants: {},
  check: checkOptions,
};
