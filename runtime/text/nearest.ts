// Suggests the name that was probably meant.

import { distance } from "fastest-levenshtein";

/** Words of the trade for what the language calls otherwise. */
const OTHERWISE: ReadonlyMap<string, string> = new Map([["ln", "log"], ["avg", "mean"], ["average", "mean"], ["std", "sd"], ["stdev", "sd"], ["var", "variance"]]);

/** The closest of `names` to what was written, where it is close enough to be worth suggesting; else null.
 *  Close enough: one letter of a name of three or four, two of five to eight, a third of a longer one; two letters swapped count as one, letter case does not count.
 *  Where none is, the one name that goes on from what was written (`diff`: `difference`), or another word for the same. */
export function nearest(written: string, names: Iterable<string>): string | null {
  const all = [...names];
  const otherwise = OTHERWISE.get(written);
  return closest(written, all) ?? longer(written, all) ?? (otherwise !== undefined && all.includes(otherwise) ? otherwise : null);
}

function closest(written: string, names: readonly string[]): string | null {
  const limit = written.length < 3 ? 0 : written.length < 5 ? 1 : Math.max(2, Math.floor(written.length / 3));
  const low = written.toLowerCase();
  let best: string | null = null;
  let bestDistance = limit + 1;
  for (const name of names) {
    if (Math.abs(name.length - written.length) > limit) continue;
    const other = name.toLowerCase();
    const apart = distance(low, other);
    const far = apart === 2 && swapped(low, other) ? 1 : apart;
    if (far < bestDistance) { best = name; bestDistance = far; }
  }
  return best;
}

function longer(written: string, names: readonly string[]): string | null {
  const found = written.length < 3 ? [] : names.filter((name) => name.toLowerCase().startsWith(written.toLowerCase()));
  return found.length === 1 ? found[0] : null;
}

function swapped(a: string, b: string): boolean {
  let at = 0;
  while (at < a.length && a[at] === b[at]) at += 1;
  return a.length === b.length && a[at] === b[at + 1] && a[at + 1] === b[at] && a.slice(at + 2) === b.slice(at + 2);
}

/** `: did you mean \`x\`?`, or nothing. */
export function suggestion(written: string, names: Iterable<string>): string {
  const near = nearest(written, names);
  return near === null ? "" : `: did you mean \`${near}\`?`;
}
