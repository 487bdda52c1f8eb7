// The files inside an archive of the ZIP form (ISO/IEC 21320-1), as office documents are kept in.

/** Most bytes that one file may unpack to: a small archive can be made to hold far more than there is memory. */
const largest = 256 * 1024 * 1024;

export interface Archive {
  readonly names: readonly string[];
  /** A file's bytes. @throws RangeError where it is not there, or cannot be unpacked */
  read(name: string): Promise<Uint8Array<ArrayBuffer>>;
}

interface Entry { readonly method: number; readonly flags: number; readonly crc: number; readonly packed: number; readonly size: number; readonly at: number }

/** Reads the directory at the archive's end.
 *  @throws RangeError in words that begin with `file` */
export function archiveOf(bytes: Uint8Array, file: string): Archive {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const damaged = (): RangeError => new RangeError(`${file} is a damaged archive: its directory cannot be read; save it again`);
  let end = bytes.length - 22;
  while (end >= 0 && end > bytes.length - 65_558 && view.getUint32(end, true) !== 0x06054b50) end--;
  if (end < 0 || view.getUint32(end, true) !== 0x06054b50) throw damaged();
  const entries = new Map<string, Entry>();
  let at = view.getUint32(end + 16, true);
  for (let k = view.getUint16(end + 10, true); k > 0; k--) {
    if (at + 46 > bytes.length || view.getUint32(at, true) !== 0x02014b50) throw damaged();
    const [nameLength, extra, remark] = [28, 30, 32].map((offset) => view.getUint16(at + offset, true));
    const name = new TextDecoder().decode(bytes.subarray(at + 46, at + 46 + nameLength));
    entries.set(name, { flags: view.getUint16(at + 8, true), method: view.getUint16(at + 10, true), crc: view.getUint32(at + 16, true), packed: view.getUint32(at + 20, true), size: view.getUint32(at + 24, true), at: view.getUint32(at + 42, true) });
    at += 46 + nameLength + extra + remark;
  }
  return {
    names: [...entries.keys()],
    read: async (name) => {
      const entry = entries.get(name);
      if (entry === undefined) throw new RangeError(`${file} holds no "${name}"`);
      if ((entry.flags & 1) !== 0) throw new RangeError(`${file} is protected by a password; save a copy without one`);
      if (entry.size > largest) throw new RangeError(`${file} unpacks to more than ${largest / 1048576} MB; save the sheet as CSV`);
      if (entry.at + 30 > bytes.length) throw damaged();
      const from = entry.at + 30 + view.getUint16(entry.at + 26, true) + view.getUint16(entry.at + 28, true);
      const packed = bytes.slice(from, from + entry.packed);
      if (entry.method === 0) return packed;
      if (entry.method !== 8) throw new RangeError(`${file} is packed in a way that is not read here (method ${entry.method}); save it again`);
      return inflated(packed, entry).catch(() => { throw damaged(); });
    },
  };
}

/** Unpacks DEFLATE data as the gzip stream that they become with a head and a tail (RFC 1952), for every surrounding unpacks those;
 *  the tail's checksum and length then guard what comes out. */
async function inflated(packed: Uint8Array<ArrayBuffer>, { crc, size }: Entry): Promise<Uint8Array<ArrayBuffer>> {
  const tail = new DataView(new ArrayBuffer(8));
  tail.setUint32(0, crc, true);
  tail.setUint32(4, size, true);
  const stream = new Blob([new Uint8Array([0x1f, 0x8b, 8, 0, 0, 0, 0, 0, 0, 3]), packed, tail.buffer]).stream().pipeThrough(new DecompressionStream("gzip"));
  const out = new Uint8Array(size);
  let length = 0;
  for (const reader = stream.getReader(); ;) {
    const { done, value } = await reader.read();
    if (done) break;
    // More than was announced: stopped before it fills the memory.
    if (length + value.length > size) { await reader.cancel(); throw new RangeError("longer than announced"); }
    out.set(value, length);
    length += value.length;
  }
  return out.subarray(0, length);
}
