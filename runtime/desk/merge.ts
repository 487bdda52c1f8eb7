// The one door to the package that merges texts: what two writers made of one text, line by line.

import { diff3Merge, diffIndices } from "node-diff3";
import type { Edit } from "../text/notebook.ts";

/** A run of lines: agreed, or written differently by the two. */
export type Region =
  | { readonly agreed: string }
  | { readonly mine: string; readonly base: string; readonly theirs: string };

/** Merges two descendants of one text. Where only one writer changed a stretch of lines, or both made the same of it, it is agreed.
 *  Joining the regions' texts gives the whole text, line ends as they were. */
export function mergeTexts(base: string, mine: string, theirs: string): readonly Region[] {
  return diff3Merge(lines(mine), lines(base), lines(theirs), { excludeFalseConflicts: true }).map((region) =>
    region.conflict ? { mine: region.conflict.a.join(""), base: region.conflict.o.join(""), theirs: region.conflict.b.join("") } : { agreed: (region.ok ?? []).join("") });
}

/** The merged text where the writers do not conflict; null where they do. */
export function mergedText(regions: readonly Region[]): string | null {
  let text = "";
  for (const region of regions) {
    if (!("agreed" in region)) return null;
    text += region.agreed;
  }
  return text;
}

/** The edits, by whole lines, that make `to` of `from`: so that an editor keeps its cursor, marks and undo across a merge. */
export function editsBetween(from: string, to: string): readonly Edit[] {
  const before = lines(from), after = lines(to);
  const starts = offsets(before);
  return diffIndices(before, after).map(({ buffer1: [at, count], buffer2Content }) => ({
    from: starts[at], to: starts[at + count], insert: buffer2Content.join(""),
  }));
}

/** Lines with their ends, so that joining them gives the text back. */
function lines(text: string): string[] { return text.match(/[^\n]*\n|[^\n]+$/g) ?? []; }

function offsets(list: readonly string[]): readonly number[] {
  const starts = [0];
  for (const line of list) starts.push(starts[starts.length - 1] + line.length);
  return starts;
}
