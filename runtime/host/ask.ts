// Values of expressions beside some cells, for who writes or checks a notebook.

import { compute } from "./headless.ts";
import { CannotRun } from "./io.ts";

/** Values of expressions beside some cells; null where one could not be computed.
 *  @param mustRun  name of a cell without which nothing can be said */
export async function ask(folder: string, cells: readonly string[], expressions: readonly string[], mustRun: string | null): Promise<readonly (number | string | boolean | null)[]> {
  const text = [...cells, ...expressions.map(asNumber)].join("\n\n");
  const computed = await compute({ text, folder, settings: [], allowCode: false });
  const failed = mustRun === null ? undefined : computed.cells.find((cell) => cell.name === mustRun && cell.state === "failed");
  if (failed) throw new CannotRun(failed.message ?? "The data could not be read.");
  return computed.numbers.slice(-expressions.length).map((number) => number.value);
}

/** An expression as a live number. */
export function asNumber(expression: string): string {
  return `[0](<=${expression.replace(/[\\<>]/g, "\\$&")}>)`;
}
