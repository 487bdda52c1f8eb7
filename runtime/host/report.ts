// What `verify` prints for people: first all that does not stand, by line, then one sentence on the rest.

import type { VerifyResult } from "../engine/result.ts";

/** @param accepted  how many numbers were written into the text; null where that was not asked for */
export function reportText(file: string, result: VerifyResult, accepted: number | null): string {
  const { waiting, rest } = byCause(result);
  const lines = [...cellLines(rest, waiting), ...claimLines(rest), ...numberLines(rest), ...problemLines(result), ...noteLines(result)].sort((a, b) => a.line - b.line || (a.column ?? 0) - (b.column ?? 0));
  const places = lines.map(({ line, column }) => `${file}:${line}${column === null ? "" : `:${column}`}`);
  const placeWidth = widest(places), width = widest(lines.map(({ what }) => what));
  const parts = lines.map(({ what, text }, i) => `${places[i].padEnd(placeWidth)}  ${what.padEnd(width)}  ${text}`);
  if (accepted !== null) parts.push(accepted === 0 ? "No number had moved." : `${accepted === 1 ? "1 number was" : `${accepted} numbers were`} written into the text.`);
  parts.push(`${result.ok ? "All stands" : "Not all stands"}: ${tally(result)}.`);
  return `${parts.join("\n")}\n`;
}

/** `column` is null where the whole line is meant. */
interface Line { readonly line: number; readonly column: number | null; readonly what: string; readonly text: string }

function widest(texts: readonly string[]): number {
  return texts.reduce((most, text) => Math.max(most, text.length), 0);
}

type Told = Pick<VerifyResult, "cells" | "numbers" | "claims">;

/** One failed cell may leave a whole notebook without its values: beyond a few, what waits for it is counted beside it, not listed. */
function byCause({ cells, numbers, claims }: VerifyResult): { readonly waiting: ReadonlyMap<string, string>; readonly rest: Told } {
  const cause = (message: string | null): string | null => /^(?:blocked by|Undecided:) (.+?),?(?: which)? failed$/.exec(message ?? "")?.[1] ?? null;
  const waiting = new Map<string, string>();
  for (const label of new Set(cells.flatMap((cell) => (cell.state === "failed" ? [labelOf(cell)] : [])))) {
    const [some, more, most] = [cells, numbers, claims].map((each: readonly { readonly message: string | null }[]) => each.filter(({ message }) => cause(message) === label).length);
    if (some + more + most <= FEW) continue;
    const undecided = [count(more, more, "number", "numbers", ""), count(most, most, "claim", "claims", "")].filter((part) => part !== "").map((part) => part.trim()).join(" and ");
    waiting.set(label, [some === 0 ? "" : `${some} ${some === 1 ? "cell is" : "cells are"} blocked by it`, undecided === "" ? "" : `${undecided} undecided`].filter((part) => part !== "").join(", "));
  }
  const alone = ({ message }: { readonly message: string | null }): boolean => !waiting.has(cause(message) ?? "");
  return { waiting, rest: { cells: cells.filter(alone), numbers: numbers.filter(alone), claims: claims.filter(alone) } };
}

const FEW = 6;

/** As the engine's messages name a cell. */
function labelOf({ kind, name, line }: VerifyResult["cells"][number]): string {
  return name === null ? `the \`${kind}\` in line ${line}` : `\`${name}\``;
}

function cellLines({ cells }: Told, waiting: ReadonlyMap<string, string>): Line[] {
  return cells.filter((cell) => cell.state !== "current").map((cell) => {
    const { line, state, kind, name, message, at } = cell, more = state === "failed" ? waiting.get(labelOf(cell)) : undefined;
    return { line: at?.line ?? line, column: at?.column ?? null, what: state, text: `${kind}${name === null ? "" : ` ${name}`}: ${message ?? ""}${more === undefined ? "" : ` (${more})`}` };
  });
}

function claimLines({ claims }: Told): Line[] {
  return claims.filter((claim) => claim.holds !== true).map(({ line, claim, holds, message }) => ({ line, column: null, what: holds === false ? "broken" : "undecided", text: `“${claim}”${message === null ? "" : `: ${reason(message)}`}` }));
}

function numberLines({ numbers }: Told): Line[] {
  return numbers.filter((number) => number.agrees !== true).map(({ line, expression, saved, now, agrees, message }) => ({
    line, column: null, what: agrees === false ? "moved" : "undecided", text: `${saved}${agrees === false ? ` is now ${now ?? "?"}` : ""}  (${expression})${message === null ? "" : `: ${reason(message)}`}`,
  }));
}

function problemLines({ problems }: VerifyResult): Line[] {
  return problems.map(({ line, column, message }) => ({ line, column, what: "problem", text: message }));
}

function noteLines({ notes }: VerifyResult): Line[] {
  return notes.map(({ line, column, message }) => ({ line, column, what: "note", text: message }));
}

/** The state is told in a column of its own. */
function reason(message: string): string {
  return message.replace(/^Undecided: /, "");
}

function tally({ cells, claims, numbers, problems }: VerifyResult): string {
  const parts = [
    count(cells.filter((cell) => cell.state === "current").length, cells.length, "cell", "cells", "current"),
    count(numbers.filter((number) => number.agrees === true).length, numbers.length, "number", "numbers", numbers.length === 1 ? "agrees" : "agree"),
    count(claims.filter((claim) => claim.holds === true).length, claims.length, "claim", "claims", claims.length === 1 ? "holds" : "hold"),
  ].filter((part) => part !== "");
  if (problems.length > 0) parts.push(problems.length === 1 ? "1 problem in the text" : `${problems.length} problems in the text`);
  return parts.join(", ") || "there is nothing to compute";
}

function count(good: number, all: number, one: string, many: string, word: string): string {
  if (all === 0) return "";
  return good === all ? `${all} ${all === 1 ? one : many} ${word}` : `${good} of ${all} ${all === 1 ? one : many} ${word}`;
}
