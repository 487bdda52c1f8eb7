// From offsets to lines and columns.

/** Line and column, counted from 1, of offsets in a text. Cost O(length) once, O(log lines) each. */
export function linesOf(text: string): (offset: number) => { readonly line: number; readonly column: number } {
  const starts = [0];
  const breaks = /\r\n|\n|\r/g;
  for (let match = breaks.exec(text); match !== null; match = breaks.exec(text)) starts.push(match.index + match[0].length);
  return (offset) => {
    let low = 0;
    let high = starts.length - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (starts[middle] <= offset) low = middle; else high = middle - 1;
    }
    return { line: low + 1, column: offset - starts[low] + 1 };
  };
}
