// A cell's field written as a live number, ready to be put into the prose.

import { fieldText } from "./format.ts";

/** `[0.31](=airline.aicc)`; the destination goes into `<…>` where CommonMark would not read it bare. */
export function fieldLink(expression: string, value: number | string | boolean): string {
  const text = fieldText(value).replace(/[\\[\]*_`<&]/g, (mark) => `\\${mark}`);
  return `[${text}](${destination(`=${expression}`)})`;
}

function destination(plain: string): string {
  if (!/[\s<>\\]/.test(plain) && balanced(plain)) return plain;
  return `<${plain.replace(/[\\<>]/g, (mark) => `\\${mark}`)}>`;
}

function balanced(text: string): boolean {
  let depth = 0;
  for (const mark of text) {
    if (mark === "(") depth += 1;
    if (mark === ")") depth -= 1;
    if (depth < 0) return false;
  }
  return depth === 0;
}
