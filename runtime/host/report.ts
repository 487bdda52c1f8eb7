// What `verify` prints for people: first all that does not stand, by line, then one sentence on the rest.

import type { VerifyResult } from "../engine/result.ts";

/** @param accepted  how many numbers were written into the text; null where that was not asked for */
export function reportText(file: string, result: VerifyResult, accepted: number | null): string {
  const lines = [...cellLines(result), ...claimLines(result), ...numberLines(result), ...problemLines(result), ...noteLines(result)].sort((a, b) => a.line - b.line || (a.column ?? 0) - (b.column ?? 0));
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

function cellLines({ cells }: VerifyResult): Line[] {
  return cells.filter((cell) => cell.state !== "current").map(({ line, state, kind, name, message, at }) => ({ line: at?.line ?? line, column: at?.column ?? null, what: state, text: `${kind}${name === null ? "" : ` ${name}`}: ${message ?? ""}` }));
}

function claimLines({ claims }: VerifyResult): Line[] {
  return claims.filter((claim) => claim.holds !== true).map(({ line, claim, holds, message }) => ({ line, column: null, what: holds === false ? "broken" : "undecided", text: `“${claim}”${message === null ? "" : `: ${reason(message)}`}` }));
}

function numberLines({ numbers }: VerifyResult): Line[] {
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
