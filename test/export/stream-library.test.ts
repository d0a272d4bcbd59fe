import { describe, expect, it } from 'vitest';
import type { Structure } from '../../src/core/layout.js';
import { InputError } from '../../src/core/problem.js';
import { writeStream } from '../../src/export/gdsii.js';
import { writeStreamLibrary } from '../../src/export/stream-library.js';
import type { LibraryOptions } from '../../src/export/stream-library.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { placedByHand, readRecords, sayable } from '../stream.js';
import { kilnPolygons, rectangle, reference, structure, withStructures } from './arrays.js';

const renamed = (from: string, to: string): Polygons =>
  JSON.parse(JSON.stringify(kilnPolygons()).replaceAll(`"${from}`, `"${to}`)) as Polygons;
const library = (drawings: Polygons[], options: Partial<LibraryOptions> = {}) =>
  readRecords(writeStreamLibrary(drawings, { topStructure: 'pair', ...options })).structures;
const names = (structures: readonly Structure[]) => structures.map(({ name }) => name);
const asDrawing = (structures: readonly Structure[]) => withStructures(structures, 'pair');

/** What `placedByHand` finds, moved. */
const moved = (found: readonly string[], dx: number): string[] =>
  found.map((line) => line.replace(/(-?\d+),(-?\d+)/g, (_, x: string, y: string) => `${Number(x) + dx},${y}`));

describe('a library of several arrays', () => {
  it('holds both side by side, each as it is by itself', () => {
    const other = renamed('kiln4', 'oven4');
    const structures = library([kilnPolygons(), other], { gap_um: 7.5 });
    expect(names(structures)).toEqual(['kiln4_unit', 'kiln4', 'oven4_unit', 'oven4', 'pair']);
    expect(structures.slice(0, 4)).toEqual([...sayable(kilnPolygons().structures), ...sayable(other.structures)]);
    const alone = placedByHand(kilnPolygons());
    expect(placedByHand(asDrawing(structures))).toEqual([...alone, ...moved(alone, 36120 + 7500)].sort());
  });

  it('renames what clashes: the same name twice, a unit that is called like another array', () => {
    expect(names(library([kilnPolygons(), kilnPolygons(), kilnPolygons()]))).toEqual([
      'kiln4_unit',
      'kiln4',
      'kiln4_unit_2',
      'kiln4_2',
      'kiln4_unit_3',
      'kiln4_3',
      'pair',
    ]);
    const clash = library([kilnPolygons(), renamed('kiln4', 'kiln4_unit')]);
    expect(new Set(names(clash)).size).toBe(clash.length);
    const alone = placedByHand(kilnPolygons());
    for (const structures of [
      library([kilnPolygons(), kilnPolygons()]),
      library([kilnPolygons(), renamed('kiln4', 'pair')]),
    ])
      expect(placedByHand(asDrawing(structures))).toEqual([...alone, ...moved(alone, 36120 + 10000)].sort());
  });

  it('keeps to the length of a name, and to names that a drawing has further down', () => {
    const long = 'n'.repeat(32);
    const one = withStructures([structure(long, { polygons: [rectangle(0, 0, 10, 10)] })], long);
    const [, second] = names(library([one, one]));
    expect(second).toBe(`${'n'.repeat(30)}_2`);
    const two = withStructures(
      [structure('a', { references: [reference('a_2')] }), structure('a_2', { polygons: [rectangle(5, 5, 10, 10)] })],
      'a',
    );
    const structures = library([two, two]);
    expect(names(structures)).toEqual(['a', 'a_2', 'a_3', 'a_2_2', 'pair']);
    expect(placedByHand(asDrawing(structures))).toHaveLength(2);
    expect(structures[2].references[0].structure).toBe('a_2_2');
  });

  it('places a drawing by its bounding box', () => {
    const off = withStructures([structure('t', { polygons: [rectangle(-100, -50, 20, 30)] })], 't');
    const [first, second] = library([off, off], { gap_um: 0 }).at(-1)!.references;
    expect([first.origin, second.origin]).toEqual([
      [100, 50],
      [220, 50],
    ]);
  });

  it('can be flat, dated and named; the same bytes on a second run', () => {
    const options = { topStructure: 'pair', flat: true, date: '2031-05-04', libraryName: 'BLOCKS' };
    const bytes = writeStreamLibrary([kilnPolygons(), kilnPolygons()], options);
    expect(writeStreamLibrary([kilnPolygons(), kilnPolygons()], options)).toEqual(bytes);
    const { structures } = readRecords(bytes);
    expect(names(structures)).toEqual(['pair']);
    expect(placedByHand(asDrawing(structures))).toHaveLength(2 * placedByHand(kilnPolygons()).length);
    expect(Buffer.from(bytes).includes('BLOCKS')).toBe(true);
  });

  it.each<[string, () => unknown]>([
    ['no drawing', () => writeStreamLibrary([], { topStructure: 'pair' })],
    ['a name that is none', () => writeStreamLibrary([kilnPolygons()], { topStructure: 'a b' })],
    [
      'units of its own',
      () =>
        writeStreamLibrary([kilnPolygons(), { ...kilnPolygons(), databaseUnit_m: 1e-10 }], { topStructure: 'pair' }),
    ],
  ])('is refused with %s', (_, write) => expect(write).toThrow(InputError));
});

describe('a flat stream file', () => {
  it('holds one structure with every shape and label', () => {
    const { structures } = readRecords(writeStream(kilnPolygons(), { flat: true }));
    expect(names(structures)).toEqual(['kiln4']);
    expect(structures[0].references).toEqual([]);
    expect(placedByHand(withStructures(structures, 'kiln4'))).toEqual(placedByHand(kilnPolygons()));
  });

  it('keeps outlines counter-clockwise whatever was mirrored and turned', () => {
    const p = withStructures([
      structure('u', { polygons: [rectangle(1, 2, 4, 6)] }),
      structure('top', { references: [reference('u', { origin: [100, 0], mirrored: true, angle_deg: 90 })] }),
    ]);
    // Mirrored: x stays, y changes sign; turned: (x, y) becomes (-y, x): (1, 2) goes by (1, -2) to (2, 1).
    const [{ polygons }] = readRecords(writeStream(p, { flat: true })).structures;
    const xy = polygons[0].xy;
    expect([...xy].sort((a, b) => a[0] - b[0] || a[1] - b[1])).toEqual([
      [102, 1],
      [102, 4],
      [106, 1],
      [106, 4],
    ]);
    const twiceArea = xy.reduce((sum, [x, y], i) => sum + x * xy[(i + 1) % 4][1] - xy[(i + 1) % 4][0] * y, 0);
    expect(twiceArea).toBe(2 * 3 * 4);
  });

  it('names a coordinate that only shows where the instance lies', () => {
    const p = withStructures([
      structure('u', { polygons: [rectangle(0, 0, 2 ** 30, 10)] }),
      structure('top', { references: [reference('u', { origin: [2 ** 30, 0] })] }),
    ]);
    expect(() => writeStream(p, { flat: true })).toThrow(InputError);
  });
});
