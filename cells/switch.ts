// On or off.

import { OptionError, type Kind } from "./kind.ts";
import type { ControlPart } from "./parts/part.ts";

export interface SwitchCell { readonly at: boolean; readonly label?: string }
type Switch = Extract<ControlPart, { control: "switch" }>;

export const switchKind: Kind<SwitchCell, Switch> = {
  name: "switch",
  sentence: "On or off, as the reader likes.",
  options: {
    at: { type: "boolean", default: false, sentence: "Whether the text has it on." },
    label: { type: "text", sentence: "What readers see beside it; the cell's name unless given." },
  },
  body: "options",
  control: { keeps: ["at"] },
  example: "at: false",
  run: ({ at: kept, label }, context) => {
    const { setting } = context;
    if (setting !== undefined && typeof setting !== "boolean") throw new OptionError(null, `${label ?? context.name ?? "a switch"} is set to ${JSON.stringify(setting)}, and takes true or false`);
    return { part: "control", control: "switch", label: label ?? context.name ?? "", at: setting ?? kept, kept };
  },
  value: (result) => result.at,
  show: (result) => [result],
};
