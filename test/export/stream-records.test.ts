import { describe, expect, it } from 'vitest';
import * as record from '../../src/export/stream-records.js';
import { StreamRecords } from '../../src/export/stream-records.js';

const hex = (bytes: Uint8Array): string => [...bytes].map((byte) => byte.toString(16).padStart(2, '0')).join('');

const library = (): StreamRecords => new StreamRecords().begin(record.BGNLIB).end();

describe('the eight-byte real', () => {
  const bytesOf = (value: number): string =>
    hex(new StreamRecords().begin(record.UNITS).real(value).end().bytes()).slice(8).toUpperCase();

  // D: exponent excess 64 to base 16, 56 bits of fraction, recomputed by script.
  it.each([
    [1e-3, '3E4189374BC6A7F0'],
    [1e-9, '3944B82FA09B5A54'],
    [1, '4110000000000000'],
    [90, '425A000000000000'],
    [180, '42B4000000000000'],
    [270, '4310E00000000000'],
    [0, '0000000000000000'],
    [-1, 'C110000000000000'],
    [-0.5, 'C080000000000000'],
  ])('%d', (value, bytes) => expect(bytesOf(value)).toBe(bytes));

  it('gives every double of its range back exactly', () => {
    for (const value of [1 / 3, Math.PI, 1e-9 / 7, 123456789.125, 1 - 2 ** -53, 15.999999999999998, 5e-60, 9e60]) {
      const bytes = BigInt(`0x${bytesOf(value)}`);
      const exponent = Number(bytes >> 56n) - 64;
      const fraction = bytes & 0xff_ffff_ffff_ffffn;
      // The fraction has at most 53 significant bits, so it is a double, and so is each power of two.
      expect(Number(fraction) * 2 ** -56 * 16 ** exponent).toBe(value);
    }
  });

  it('refuses what has no such form', () => {
    for (const value of [Infinity, NaN, 1e90, 1e-90]) expect(() => bytesOf(value)).toThrow(/cannot be written/);
  });
});

describe('framing', () => {
  it('pads odd texts to an even length', () => {
    const bytes = library().begin(record.LIBNAME).text('abc').end().bare(record.ENDLIB).bytes();
    expect(hex(bytes)).toBe('00040102' + '00080206' + '61626300' + '00040400');
  });

  it('grows past its first allocation without a change', () => {
    const out = library();
    for (let i = 0; i < 40_000; i++) out.begin(record.XY).int32(i).end();
    const bytes = out.bare(record.ENDLIB).bytes();
    expect(bytes.length).toBe(4 + 40_000 * 8 + 4);
    expect(new DataView(bytes.buffer, bytes.byteOffset).getInt32(4 + 39_999 * 8 + 4)).toBe(39_999);
  });

  it.each<[string, (out: StreamRecords) => unknown]>([
    ['a record in a record', (out) => out.begin(record.XY).begin(record.XY)],
    ['an end without a beginning', (out) => out.end()],
    ['an odd length', (out) => out.begin(record.STRING).text('').int16(1).end().end()],
    ['an element outside a structure', (out) => out.bare(record.BOUNDARY)],
    ['a structure in a structure', (out) => out.bare(record.BGNSTR).bare(record.BGNSTR)],
    ['an element in an element', (out) => out.bare(record.BGNSTR).bare(record.TEXT).bare(record.SREF)],
    ['a structure that ends in an element', (out) => out.bare(record.BGNSTR).bare(record.TEXT).bare(record.ENDSTR)],
    ['a library that ends in a structure', (out) => out.bare(record.BGNSTR).bare(record.ENDLIB)],
    ['an unfinished library', (out) => out.bytes()],
    ['a 17-bit number', (out) => out.begin(record.LAYER).int16(0x8000)],
    ['a fraction', (out) => out.begin(record.XY).int32(0.5)],
    ['a 33-bit number', (out) => out.begin(record.XY).int32(2 ** 31)],
    ['a character of more than seven bits', (out) => out.begin(record.STRING).text('µ')],
    [
      'a record past 65,535 bytes',
      (out) => {
        out.begin(record.XY);
        for (let i = 0; i < 0x4000; i++) out.int32(i);
        out.end();
      },
    ],
  ])('refuses %s', (_, misuse) => expect(() => misuse(library())).toThrow(Error));
});
