// Bytes of a data file to text, with a refusal in words where they are no text.

/** Text of a file: UTF-8, or UTF-16 where it starts with that mark. The byte order mark is taken off.
 *  @throws RangeError in words that begin with the file's name */
export function decode(bytes: Uint8Array, file: string): string {
  if (bytes.length === 0) throw new RangeError(`${file} is empty: it has no rows to read`);
  const binary = binaryKind(bytes);
  if (binary !== null) throw new RangeError(`${file} is ${binary}, not a text file; save the data as CSV (comma-separated text) or .xlsx and name that file`);
  const wide = bytes[0] === 0xff && bytes[1] === 0xfe ? "utf-16le" : bytes[0] === 0xfe && bytes[1] === 0xff ? "utf-16be" : null;
  if (wide !== null) return new TextDecoder(wide).decode(bytes);
  const zero = bytes.indexOf(0);
  if (zero >= 0) throw new RangeError(`${file} is not a text file: byte ${zero + 1} is zero, which no text holds; save the data as CSV in UTF-8`);
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch {
    const line = firstBadLine(bytes);
    throw new RangeError(`${file} is not UTF-8 text: line ${line} holds bytes of another encoding; save the file again as UTF-8`);
  }
}

/** What a well-known first mark says about a file that is no text. */
function binaryKind(bytes: Uint8Array): string | null {
  const mark = String.fromCharCode(...bytes.subarray(0, 8));
  if (mark.startsWith("\u00d0\u00cf\u0011\u00e0")) return "an old spreadsheet or office document";
  if (mark.startsWith("PAR1")) return "a Parquet file";
  if (mark.startsWith("%PDF")) return "a PDF document";
  if (mark.startsWith("\u0089PNG") || mark.startsWith("\u00ff\u00d8\u00ff")) return "a picture";
  if (mark.startsWith("\u001f\u008b")) return "a compressed file";
  return null;
}

function firstBadLine(bytes: Uint8Array): number {
  let line = 1, from = 0;
  for (let i = 0; i <= bytes.length; i++) {
    if (i < bytes.length && bytes[i] !== 10) continue;
    try { new TextDecoder("utf-8", { fatal: true }).decode(bytes.subarray(from, i)); } catch { return line; }
    from = i + 1;
    line++;
  }
  return line;
}
