// A number that a reader can move.

import { OptionError, type Kind } from "./kind.ts";
import type { ControlPart } from "./parts/part.ts";

export interface SliderCell { readonly from: number; readonly to: number; readonly step: number; readonly at?: number; readonly label?: string }
type Slider = Extract<ControlPart, { control: "slider" }>;

export const slider: Kind<SliderCell, Slider> = {
  name: "slider",
  sentence: "A number the reader can move.",
  options: {
    from: { type: "number", required: true, sentence: "The smallest setting.", example: "0" },
    to: { type: "number", required: true, sentence: "The largest setting.", example: "10" },
    step: { type: "number", default: 1, sentence: "Distance between settings." },
    at: { type: "number", sentence: "The setting that the text keeps; `from` unless given.", example: "1" },
    label: { type: "text", sentence: "What readers see beside it; the cell's name unless given." },
  },
  body: "options",
  control: { keeps: ["at"] },
  example: "from: 0\nto: 10\nat: 1",
  run: (options, context) => {
    const { from, to, step, at = from, label = context.name ?? "" } = options;
    if (!Number.isFinite(from) || !Number.isFinite(to) || to < from) throw new OptionError("to", `\`to\` is ${to}, which lies before \`from\`, ${from}`);
    if (!(step > 0) || !Number.isFinite(step)) throw new OptionError("step", `\`step\` is ${step}; give a number above 0`);
    const kept = onGrid(at, from, to, step, "at");
    const { setting } = context;
    if (setting !== undefined && typeof setting !== "number") throw new OptionError(null, `${label || "a slider"} is set to ${JSON.stringify(setting)}, and takes a number from ${from} to ${to}`);
    return { part: "control", control: "slider", label, from, to, step, at: setting === undefined ? kept : onGrid(setting, from, to, step, null), kept };
  },
  value: (result) => result.at,
  show: (result) => [result],
};

/** The setting, freed of the rounding that steps such as 0.1 bring.
 *  @throws OptionError where it is no step from the start */
function onGrid(at: number, from: number, to: number, step: number, option: string | null): number {
  const called = option === null ? "the setting" : `\`${option}\``;
  if (!(at >= from && at <= to)) throw new OptionError(option, `${called} is ${at}, outside ${from} to ${to}`);
  const steps = Math.round((at - from) / step);
  const near = Number((from + steps * step).toPrecision(14));
  if (Math.abs(at - near) > 1e-6 * step) throw new OptionError(option, `${called} is ${at}, between two settings: steps of ${step} from ${from} give ${Number((from + Math.floor((at - from) / step) * step).toPrecision(14))} and ${Number((from + Math.ceil((at - from) / step) * step).toPrecision(14))}`);
  return near;
}
