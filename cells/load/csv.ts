// Separated text (RFC 4180 and its usual relatives) to rows of cells that know their line.
// Own code because messages must name the line of a row, also after a quoted line break, and an unterminated quote must be told.

export interface Row {
  /** Line of the file on which the row starts, from 1. */
  readonly line: number;
  /** Cells with white space around them taken off. */
  readonly cells: readonly string[];
}

export type Separator = "," | ";" | "\t" | "|";

/** All rows that are not blank.
 *  @param separator  the sign between cells
 *  @throws RangeError where a quote is opened and never closed
 *  Cost O(length) */
export function parseRows(text: string, separator: Separator, file = "the file"): Row[] {
  const rows: Row[] = [];
  let line = 1, at = 0;
  const n = text.length;
  const blank = separator === "\t" ? [" "] : [" ", "\t"];
  while (at < n) {
    const row: string[] = [];
    const startLine = line;
    for (;;) {
      while (at < n && blank.includes(text[at])) at++;
      if (text[at] === '"') {
        let cell = "";
        at++;
        for (;;) {
          const close = text.indexOf('"', at);
          if (close < 0) throw new RangeError(`${file}, line ${startLine}: a quote (") is opened and never closed`);
          cell += text.slice(at, close);
          at = close + 1;
          if (text[at] !== '"') break;
          cell += '"';
          at++;
        }
        for (const c of cell) if (c === "\n") line++;
        const rest = endOfCell(text, at, separator);
        row.push(cell.trim() + text.slice(at, rest).trim());
        at = rest;
      } else {
        const end = endOfCell(text, at, separator);
        row.push(text.slice(at, end).trim());
        at = end;
      }
      if (text[at] !== separator) break;
      at++;
    }
    if (text[at] === "\r") at += text[at + 1] === "\n" ? 2 : 1;
    else at++;
    line++;
    if (row.some((cell) => cell !== "")) rows.push({ line: startLine, cells: row });
  }
  return rows;
}

function endOfCell(text: string, from: number, separator: string): number {
  let at = from;
  while (at < text.length && text[at] !== separator && text[at] !== "\n" && text[at] !== "\r") at++;
  return at;
}

/** The separator that divides the first lines most evenly; "," where there is only one column.
 *  A semicolon or tab wins over a comma that divides as evenly: the comma is then a decimal sign. */
export function separatorOf(text: string): Separator {
  const head = text.slice(0, 20_000).split(/\r\n|\n|\r/).slice(0, 40).filter((l) => l.trim() !== "" && !l.startsWith("#"));
  if (text.length > 20_000 && head.length > 1) head.pop(); // the last one may be cut off
  let best: Separator = ",", bestScore = 0;
  for (const separator of ["\t", ";", ",", "|"] as const) {
    const counts = head.map((l) => countOutsideQuotes(l, separator));
    const usual = mode(counts);
    const even = usual === 0 ? 0 : counts.filter((c) => c === usual).length / counts.length;
    if (even > bestScore + 1e-9) { best = separator; bestScore = even; }
  }
  return best;
}

function countOutsideQuotes(line: string, sign: string): number {
  let count = 0, quoted = false;
  for (const c of line) {
    if (c === '"') quoted = !quoted;
    else if (c === sign && !quoted) count++;
  }
  return count;
}

function mode(counts: readonly number[]): number {
  const seen = new Map<number, number>();
  for (const c of counts) seen.set(c, (seen.get(c) ?? 0) + 1);
  return [...seen].sort((a, b) => b[1] - a[1] || b[0] - a[0])[0]?.[0] ?? 0;
}
