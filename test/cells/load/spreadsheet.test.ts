import { readFileSync } from "node:fs";
import { deflateRawSync } from "node:zlib";
import { describe, expect, it } from "vitest";
import { load } from "../../../cells/load/load.ts";
import type { Series } from "../../../stdlib/index.ts";
import { contextOf, runCell } from "../context.ts";

// test/fixtures/ferry.xlsx was written by openpyxl 3.1.5, weekly.xlsx by XlsxWriter 3.2.9 (spreadsheets.py beside them).
const fixture = (name: string): Uint8Array => new Uint8Array(readFileSync(`test/fixtures/${name}`));

async function loaded(bytes: Uint8Array, options: Record<string, unknown> = {}): Promise<{ readonly series: Series; readonly notes: readonly string[] }> {
  const context = contextOf({ name: "y", files: { "a.xlsx": bytes } });
  return { series: await runCell(load, { file: "a.xlsx", ...options }, context) as Series, notes: context.notes };
}
const said = async (bytes: Uint8Array, options: Record<string, unknown> = {}): Promise<string> => loaded(bytes, options).then(({ series }) => { throw new Error(`read ${series.n} values`); }, (error: Error) => error.message);

describe("load reads spreadsheets", () => {
  it("a sheet by name, its data anywhere on it, with dates and empty cells", async () => {
    const { series, notes } = await loaded(fixture("ferry.xlsx"), { sheet: "Crossings", value: "Vehicles & vans" });
    expect([series.every, series.start, series.n, series.unit]).toEqual(["P1M", "2019-01", 24, ""]);
    for (let i = 0; i < 24; i++) expect(series.values[i]).toBe(i === 5 ? NaN : Math.round((1000 + 80 * Math.sin(i / 2) + i / 3) * 100) / 100);
    expect(notes).toContain("1 value of y is missing: 2019-06");
    expect((await loaded(fixture("ferry.xlsx"), { sheet: "Crossings", value: "Share" })).series.values[3]).toBe(0.23);
  });

  it("times of day", async () => {
    const { series } = await loaded(fixture("ferry.xlsx"), { sheet: "Hours" });
    expect([series.every, series.start, series.times[47]]).toEqual(["PT1H", "2023-03-05T00:00:00", "2023-03-06T23:00:00"]);
    // openpyxl writes 16 digits.
    expect(series.values[3]).toBeCloseTo(0.0045, 15);
  });

  it("days counted from 1904, formulas by their value, the first sheet where none is named", async () => {
    const { series, notes } = await loaded(fixture("weekly.xlsx"));
    expect([series.every, series.times[0], ...series.values.slice(0, 3)]).toEqual(["P1W", "2021-01-04", 4, 6, 8]);
    expect(notes).toEqual([]);
  });

  it("days before the day that 1900 did not have", async () => {
    const sheet = '<sheetData><row r="1"><c r="A1" t="inlineStr"><is><t>day</t></is></c><c r="B1" t="inlineStr"><is><r><t>v</t></r><rPh><t>x</t></rPh></is></c></row>' + [58, 59, 61].map((day, i) => `<row r="${i + 2}"><c r="A${i + 2}" s="1"><v>${day}</v></c><c r="B${i + 2}"><v>${i}</v></c></row>`).join("") + "</sheetData>";
    // ECMA-376, part 1, 18.17.4.1: 58 is 27 February 1900, 61 is 1 March.
    expect((await loaded(workbook(sheet))).series.times).toEqual(["1900-02-27", "1900-02-28", "1900-03-01"]);
  });
});

describe("load refuses in words", () => {
  it("a sheet that is not there, and a sheet without series", async () => {
    expect(await said(fixture("ferry.xlsx"), { sheet: "Crossing" })).toBe('a.xlsx has no sheet "Crossing"; its sheets are "About", "Crossings", "Hours"');
    expect(await said(fixture("ferry.xlsx"))).toMatch(/a\.xlsx has a header and no rows below it/);
  });

  it("an archive that is damaged, cut off, locked, something else, or larger than it says", async () => {
    const whole = fixture("weekly.xlsx");
    expect(await said(whole.slice(0, 3000))).toMatch(/^a\.xlsx is a damaged archive/);
    const flipped = whole.slice();
    for (let i = 200; i < 2500; i += 7) flipped[i] ^= 0xff;
    expect(await said(flipped)).toMatch(/^a\.xlsx /);
    expect(await said(archive({ "word/document.xml": "<a/>" }))).toMatch(/is an archive, not a spreadsheet that can be read/);
    expect(await said(archive({ "xl/workbook.xml": "x".repeat(50_000) }, 100))).toMatch(/is a damaged archive/);
  });
});

/** A workbook of one sheet whose style 1 shows a date. */
function workbook(sheet: string): Uint8Array {
  return archive({
    "xl/workbook.xml": '<workbook xmlns:r="x"><sheets><sheet name="One" sheetId="1" r:id="r1"/></sheets></workbook>',
    "xl/_rels/workbook.xml.rels": '<Relationships><Relationship Id="r1" Target="worksheets/sheet1.xml"/></Relationships>',
    "xl/styles.xml": '<styleSheet><cellXfs count="2"><xf numFmtId="0"/><xf numFmtId="14"/></cellXfs></styleSheet>',
    "xl/worksheets/sheet1.xml": `<worksheet>${sheet}</worksheet>`,
  });
}

/** A ZIP archive by hand (ISO/IEC 21320-1). @param claims  length to announce instead of the true one */
function archive(files: Readonly<Record<string, string>>, claims?: number): Uint8Array {
  const parts: Buffer[] = [], directory: Buffer[] = [];
  let at = 0;
  for (const [name, text] of Object.entries(files)) {
    const raw = Buffer.from(text), packed = deflateRawSync(raw), head = Buffer.alloc(30), entry = Buffer.alloc(46);
    const sum = crc32(raw), size = claims ?? raw.length;
    for (const [buffer, from] of [[head, 4], [entry, 6]] as const) {
      buffer.writeUInt16LE(20, from); buffer.writeUInt16LE(8, from + 4); buffer.writeUInt32LE(sum, from + 10); buffer.writeUInt32LE(packed.length, from + 14); buffer.writeUInt32LE(size, from + 18); buffer.writeUInt16LE(name.length, from + 22);
    }
    head.writeUInt32LE(0x04034b50, 0); entry.writeUInt32LE(0x02014b50, 0); entry.writeUInt32LE(at, 42);
    parts.push(head, Buffer.from(name), packed);
    directory.push(entry, Buffer.from(name));
    at += 30 + name.length + packed.length;
  }
  const index = Buffer.concat(directory), end = Buffer.alloc(22);
  end.writeUInt32LE(0x06054b50, 0); end.writeUInt16LE(Object.keys(files).length, 10); end.writeUInt32LE(index.length, 12); end.writeUInt32LE(at, 16);
  return new Uint8Array(Buffer.concat([...parts, index, end]));
}

function crc32(bytes: Uint8Array): number {
  let crc = 0xffffffff;
  for (const byte of bytes) { crc ^= byte; for (let k = 0; k < 8; k++) crc = (crc >>> 1) ^ (0xedb88320 & -(crc & 1)); }
  return (crc ^ 0xffffffff) >>> 0;
}
