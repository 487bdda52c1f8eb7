// Suggests the name that was probably meant.

import { distance } from "fastest-levenshtein";

/** The closest of `names` to what was written, where it is close enough to be worth suggesting; else null.
 *  Close enough: at most a third of the letters differ (at least one, two from five letters on); letter case does not count. */
export function nearest(written: string, names: Iterable<string>): string | null {
  const limit = written.length >= 5 ? Math.max(2, Math.floor(written.length / 3)) : 1;
  const low = written.toLowerCase();
  let best: string | null = null;
  let bestDistance = limit + 1;
  for (const name of names) {
    if (Math.abs(name.length - written.length) > limit) continue;
    const far = distance(low, name.toLowerCase());
    if (far < bestDistance) { best = name; bestDistance = far; }
  }
  return best;
}

/** `: did you mean \`x\`?`, or nothing. */
export function suggestion(written: string, names: Iterable<string>): string {
  const near = nearest(written, names);
  return near === null ? "" : `: did you mean \`${near}\`?`;
}
