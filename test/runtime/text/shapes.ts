// A few kinds, as the text needs to know them.

import type { Shape } from "../../../runtime/text/notebook.ts";

export const shapes: readonly Shape[] = [
  { name: "load", body: "options", options: { file: { required: true, type: "text" }, time: { type: { anyOf: ["text", { listOf: "text" }] } }, order: { type: { oneOf: ["day-month", "month-day"] } } } },
  { name: "slider", body: "options", options: { from: { required: true }, to: { required: true }, step: {}, at: {} }, control: { keeps: ["at"] } },
  { name: "choice", body: "options", options: { among: { required: true, type: "list" }, at: { type: "any" } }, control: { keeps: ["at"] } },
  { name: "window", body: "options", options: { of: { required: true }, from: {}, to: {} }, control: { keeps: ["from", "to"] } },
  { name: "transform", body: "options", options: { series: { required: true }, window: {}, steps: { required: true } } },
  { name: "sweep", body: "options", options: { over: { required: true, taken: "name" }, measure: { required: true, taken: "expression" } } },
  { name: "values", body: "names", options: {} },
  { name: "claims", body: "claims", options: {} },
  { name: "script", body: "code", options: {} },
];
export const names = ["log", "difference", "ljungBox", "rule", "mean"];
export const fence = "```";
export const cell = (head: string, ...lines: readonly string[]): string => [fence + head, ...lines, fence, "", ""].join("\n");
