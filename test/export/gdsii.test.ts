import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/core/problem.js';
import { writeStream } from '../../src/export/gdsii.js';
import type { StreamOptions } from '../../src/export/gdsii.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { kilnPolygons, rectangle, reference, structure, withStructures } from './arrays.js';

function problemsOf(p: Polygons, options?: StreamOptions): string[] {
  try {
    writeStream(p, options);
    return [];
  } catch (error) {
    if (error instanceof InputError) return error.problems.map(({ pointer, found }) => `${pointer}: ${found}`);
    throw error;
  }
}

describe('writeStream', () => {
  it('writes a small library byte by byte as the format says', () => {
    const p = withStructures([
      structure('u', { polygons: [rectangle(-1, -2, 3, 4, { layer: 7, datatype: 2 })] }),
      structure('top', {
        references: [
          reference('u', { origin: [10, 20], mirrored: true, angle_deg: 90 }),
          reference('u', { columns: 3, rows: 2, columnStep: [5, 0], rowStep: [0, 6] }),
        ],
        labels: [{ text: 'PIN', layer: 21, texttype: 5, xy: [1, 1] }],
      }),
    ]);
    // Assembled by hand: length, type and data type, data of each record.
    const date = '07ea 0001 001f 0000 0000 0000';
    const expected = `
      0006 0002 0258
      001c 0102 ${date} ${date}
      0008 0206 746f7000
      0014 0305 3e4189374bc6a7f0 3944b82fa09b5a54
      001c 0502 ${date} ${date}
      0006 0606 7500
      0004 0800  0006 0d02 0007  0006 0e02 0002
      002c 1003 ffffffff fffffffe 00000003 fffffffe 00000003 00000004 ffffffff 00000004 ffffffff fffffffe
      0004 1100
      0004 0700
      001c 0502 ${date} ${date}
      0008 0606 746f7000
      0004 0a00  0006 1206 7500  0006 1a01 8000  000c 1c05 425a000000000000
      000c 1003 0000000a 00000014
      0004 1100
      0004 0b00  0006 1206 7500  0008 1302 0003 0002
      001c 1003 00000000 00000000 0000000f 00000000 00000000 0000000c
      0004 1100
      0004 0c00  0006 0d02 0015  0006 1602 0005  000c 1003 00000001 00000001  0008 1906 50494e00
      0004 1100
      0004 0700
      0004 0400`;
    const bytes = writeStream(p, { date: '2026-01-31' });
    expect(Buffer.from(bytes).toString('hex')).toBe(expected.replace(/\s+/g, ''));
  });

  it('gives the same bytes for the same drawing, and the array its name', () => {
    const first = writeStream(kilnPolygons());
    expect(writeStream(kilnPolygons())).toEqual(first);
    expect(Buffer.from(first).includes('kiln4_unit')).toBe(true);
    expect(Buffer.from(writeStream(kilnPolygons(), { libraryName: 'BLOCKS' })).includes('BLOCKS')).toBe(true);
  });

  it('holds outlines of up to 8190 corners', () => {
    const comb = (corners: number) =>
      withStructures([
        structure('top', {
          polygons: [{ layer: 1, datatype: 0, xy: Array.from({ length: corners }, (_, i) => [i, i % 2] as const) }],
        }),
      ]);
    expect(problemsOf(comb(8190))).toEqual([]);
    expect(problemsOf(comb(8191))).toEqual(['/structures/0/polygons/0/xy: 8191 corners']);
    expect(problemsOf(comb(2))).toEqual(['/structures/0/polygons/0/xy: 2 corners']);
  });

  it('names everything that the format cannot hold at once', () => {
    const p = withStructures(
      [
        structure('a-b', {
          polygons: [rectangle(0, 0, 1, 1, { layer: 256, datatype: -1 }), rectangle(0, 0, 0.5, 2 ** 31)],
          references: [
            reference('nobody'),
            reference('x'.repeat(33), { columns: 32768, rows: 0 }),
            reference('x'.repeat(33), { columns: 3, columnStep: [2 ** 30, 0] }),
          ],
          labels: [{ text: 'µ', layer: 1.5, texttype: 300, xy: [0, NaN] }],
        }),
        structure('x'.repeat(33)),
        structure('x'.repeat(33)),
      ],
      'top',
    );
    const long = `"${'x'.repeat(33)}"`;
    expect(problemsOf(p, { date: '2025-02-29', libraryName: '' })).toEqual([
      '/structures/0/name: "a-b"',
      '/structures/0/polygons/0/layer: 256',
      '/structures/0/polygons/0/datatype: -1',
      '/structures/0/polygons/1/xy/1: [0.5,0]',
      '/structures/0/references/0/structure: "nobody"',
      '/structures/0/references/1/columns: 32768',
      '/structures/0/references/1/rows: 0',
      '/structures/0/references/2/origin/1: [3221225472,0]',
      '/structures/0/labels/0/layer: 1.5',
      '/structures/0/labels/0/texttype: 300',
      '/structures/0/labels/0/text: "µ"',
      '/structures/0/labels/0/xy/0: [0,NaN]',
      `/structures/1/name: ${long}`,
      `/structures/2/name: ${long}`,
      `/structures/2/name: ${long} again`,
      ': library name ""',
      '/topStructure: "top"',
      ': date "2025-02-29"',
    ]);
  });

  it.each(['2024-02-29', '2000-02-29', '1999-12-31'])('knows the day %s', (date) =>
    expect(problemsOf(kilnPolygons(), { date })).toEqual([]),
  );
  it.each(['1900-02-29', '2024-13-01', '2024-04-31', '2024-00-10', '2024-1-1', 'today', '2024-01-01T00:00'])(
    'knows no day %s',
    (date) => expect(problemsOf(kilnPolygons(), { date })).toEqual([`: date "${date}"`]),
  );
});
