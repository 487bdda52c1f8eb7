// Bytes as printable text, denser than base64: 13 bits in two of the 91 signs that stand as they are in a script element and
// in a JSON text.

/** Printable ASCII without `"`, `<` and the backslash. */
const signs = Array.from({ length: 94 }, (_, i) => i + 33).filter((code) => !'"<\\'.includes(String.fromCharCode(code)));

/** @returns about 1.23 signs a byte */
export function dense(bytes: Uint8Array): string {
  const text = new Uint8Array(Math.ceil(bytes.length * 8 / 13) * 2);
  let held = 0, bits = 0, length = 0;
  const put = (value: number): void => { text[length++] = signs[value]; };
  for (const byte of bytes) {
    held |= byte << bits;
    bits += 8;
    if (bits < 13) continue;
    const value = held & 8191;
    put(value % 91); put(Math.floor(value / 91));
    held >>= 13;
    bits -= 13;
  }
  // What is left: up to 6 bits in one sign, more in two, so that the reader never takes the filling for a byte.
  if (bits > 0) put(held % 91);
  if (bits > 6) put(Math.floor(held / 91));
  return new TextDecoder().decode(text.subarray(0, length));
}

/** The bytes that `dense` printed. */
export function fromDense(text: string): Uint8Array<ArrayBuffer> {
  const values = new Uint8Array(128);
  signs.forEach((code, value) => { values[code] = value; });
  const bytes = new Uint8Array(Math.floor((text.length >> 1) * 13 / 8 + (text.length % 2) * 6 / 8));
  let held = 0, bits = 0, length = 0;
  for (let i = 0; i < text.length; i += 2) {
    const two = i + 1 < text.length;
    held |= (values[text.charCodeAt(i)] + (two ? values[text.charCodeAt(i + 1)] * 91 : 0)) << bits;
    bits += two ? 13 : 6;
    for (; bits >= 8 && length < bytes.length; bits -= 8) { bytes[length++] = held & 255; held >>= 8; }
  }
  return bytes;
}
