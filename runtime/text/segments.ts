// Cuts a text where its top-level blocks can be read one by one, so that an edit costs the block edited and not the whole text.

/** Starts of the segments, the first 0. Each segment but the first begins in column 0 after a blank line, outside any fence or HTML block,
 *  and not with what could go on with a list: there CommonMark has closed every container. Where that cannot be told line by line
 *  (an indented fence may belong to a list item, one behind a marker may be left open), the text is one segment. Cost O(length). */
export function segmentStarts(text: string): number[] {
  const starts = [0];
  let blank = false;
  let until: RegExp | null = null;
  for (const [from, to] of lines(text)) {
    const line = text.slice(from, to);
    if (until !== null) {
      if (until.test(line)) until = null;
      blank = false;
      continue;
    }
    if (/^[ \t]*$/.test(line)) { blank = true; continue; }
    if (UNCERTAIN.test(line)) return [0];
    if (blank && from > 0 && !/^(?:[ \t]|[-*+](?:\s|$)|\d{1,9}[.)](?:\s|$))/.test(line)) starts.push(from);
    until = opened(line);
    blank = false;
  }
  return starts;
}

/** A fence or HTML block behind white space, or behind the mark of a list, quotation or footnote. */
const UNCERTAIN = /^(?:\uFEFF|[ \t]{1,3}(?:`{3}|~{3}|\$\$|<)|(?:(?:>|[-*+]|\d{1,9}[.)]|\[\^[^\]\s]+\]:)[ \t]*)+(?:`{3}|~{3}|\$\$|<))/;

/** What closes the block that a line in column 0 opens, where blank lines do not; null for any other. */
function opened(line: string): RegExp | null {
  const fence = /^(?:(`{3,})[^`]*|(~{3,}).*|(\${2,})[^$]*)$/.exec(line);
  if (fence !== null) {
    const mark = fence[1] ?? fence[2] ?? fence[3];
    return new RegExp(`^ {0,3}${mark[0] === "$" ? "\\$" : mark[0]}{${mark.length},}[ \\t]*$`);
  }
  if (line[0] !== "<") return null;
  const closers: readonly [RegExp, RegExp][] = [
    [/^<(?:script|pre|style|textarea)(?:[\s>]|$)/i, /<\/(?:script|pre|style|textarea)>/i],
    [/^<!--/, /-->/], [/^<\?/, /\?>/], [/^<!\[CDATA\[/, /\]\]>/], [/^<![A-Za-z]/, />/],
  ];
  const closer = closers.find(([opener]) => opener.test(line))?.[1] ?? null;
  return closer === null || closer.test(line) ? null : closer;
}

/** Places of the lines, their breaks left out. */
function* lines(text: string): Generator<readonly [number, number]> {
  const breaks = /\r\n|\n|\r/g;
  let from = 0;
  for (let match = breaks.exec(text); match !== null; match = breaks.exec(text)) {
    yield [from, match.index];
    from = match.index + match[0].length;
  }
  yield [from, text.length];
}
