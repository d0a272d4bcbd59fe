import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Polygon, Reference } from '../../src/core/layout.js';
import { writeStream } from '../../src/export/gdsii.js';
import { withPinNames } from '../../src/export/pin-names.js';
import { applyLayerMap } from '../../src/spec/layer-map.js';
import type { Technology } from '../../src/spec/technology.js';
import { drawFloorplan } from '../../src/pipeline.js';
import { drawn, parallelPlate } from '../pipeline/drawn.js';
import { placedByHand, readRecords, sayable } from '../stream.js';
import { kilnPolygons, reference, structure, withStructures } from '../export/arrays.js';

// Two readers that have nothing to do with this project: the npm package gdsii (records) and Debian's gdsiiconvert, which places the
// instances of references by its own arithmetic.

let directory = '';
beforeAll(() => (directory = mkdtempSync(join(tmpdir(), 'stream-'))));
afterAll(() => rmSync(directory, { recursive: true }));

/** Layer and corners of every polygon, layer and place of every label, as the other program has placed them. */
function convert(bytes: Uint8Array): string[] {
  const file = join(directory, 'drawing.gds');
  writeFileSync(file, bytes);
  for (const result of ['drawing.geo', 'drawing.pp']) rmSync(join(directory, result), { force: true });
  execFileSync('GDSIIConvert', [file, '--GMSH', '--FileBase', 'drawing'], { cwd: directory, stdio: 'pipe' });
  const read = (name: string) => {
    try {
      return readFileSync(join(directory, name), 'utf8');
    } catch {
      return '';
    }
  };
  const whole = (micrometres: string) => Math.round(Number(micrometres) * 1000) + 0;
  const found: string[] = [];
  for (const block of read('drawing.geo').split('// Layer ').slice(1)) {
    const corners = [...block.matchAll(/^Point\(\d+\)=\{(.+?),(.+?),/gm)].map(([, x, y]) => `${whole(x)},${whole(y)}`);
    found.push(`${parseInt(block)}: ${corners.join(' ')}`);
  }
  for (const [, layer, x, y, text] of read('drawing.pp').matchAll(
    /^View "Layer (\d+) .*\nT3 \((.+?),(.+?),.*\{"(.*)"\}/gm,
  ))
    found.push(`${layer}: ${text} at ${whole(x)},${whole(y)}`);
  return found.sort();
}

describe('a small array', () => {
  const bytes = writeStream(kilnPolygons());

  it('is read back record by record', () => {
    const { units, structures } = readRecords(bytes);
    expect(structures).toEqual(sayable(kilnPolygons().structures));
    // The package drops the last byte of the fraction.
    const { userUnit, metersPerUnit } = units as { userUnit: number; metersPerUnit: number };
    expect(userUnit / 1e-3).toBeCloseTo(1, 12);
    expect(metersPerUnit / 1e-9).toBeCloseTo(1, 12);
  });

  it('is placed by another program as by the polygon list', () => {
    const found = convert(bytes);
    expect(found).toEqual(placedByHand(kilnPolygons()));
    // 212 of its own and 5 in each of 35 units; 8 labels.
    expect(found).toHaveLength(212 + 5 * 35 + 8);
  });
});

describe('an array in all its forms', () => {
  const { floorplan } = drawn({ bits: 5, effort: 'quick' });
  const map = {
    format: 'steelyard/layers',
    version: 1,
    layers: [
      { name: 'plate-metal', stream: { layer: 123, datatype: 4 } },
      { name: 'lower-metal-pin', stream: { layer: 200, datatype: 7 } },
      { name: 'boundary', stream: { layer: 0, datatype: 0 } },
    ],
  } as const;
  const mapped = applyLayerMap(parallelPlate, map);
  if (!mapped.ok) throw new Error('the map does not fit the template');
  const numbersOf = (technology: Technology) =>
    new Map([...technology.layers, ...technology.vias].map(({ name, stream }) => [name, stream]));

  it.each<[string, Technology, boolean]>([
    ['hierarchical, own numbers', parallelPlate, false],
    ['hierarchical, mapped', mapped.value, false],
    ['flat, own numbers', parallelPlate, true],
    ['flat, mapped', mapped.value, true],
  ])('%s: both readers see the shapes, layers and labels of the polygon list', (_, technology, flat) => {
    const p = drawFloorplan(floorplan, technology, { keepHookup: true }).polygons!;
    const bytes = writeStream(p, { flat });
    expect(convert(bytes)).toEqual(placedByHand(p));
    const { structures } = readRecords(bytes);
    if (flat) {
      expect(structures.map(({ name, references }) => [name, references.length])).toEqual([[p.topStructure, 0]]);
      expect(placedByHand({ ...p, structures })).toEqual(placedByHand(p));
    } else expect(structures).toEqual(sayable(p.structures));
    // Layer and datatype of everything, not the layer alone: the count of each number is the count of its layer.
    const count = (list: typeof structures, at: { layer: number; datatype: number }) =>
      list.flatMap((s) => s.polygons).filter((q) => q.layer === at.layer && q.datatype === at.datatype).length;
    const plain = readRecords(
      writeStream(drawFloorplan(floorplan, parallelPlate, { keepHookup: true }).polygons!, { flat }),
    );
    for (const [name, stream] of numbersOf(technology))
      expect([name, count(structures, stream)]).toEqual([
        name,
        count(plain.structures, numbersOf(parallelPlate).get(name)!),
      ]);
    expect(writeStream(p, { flat })).toEqual(bytes);
  });

  it.each([false, true])("the user's pin names stand on the pin layers, flat %s", (flat) => {
    const p = drawFloorplan(floorplan, parallelPlate, { keepHookup: true }).polygons!;
    const pins = [
      { pin: 'B0', name: 'sar_d[0]' },
      { pin: 'TOP', name: 'vdac' },
    ];
    const found = convert(writeStream(withPinNames(p, { format: 'steelyard/pins', version: 1, pins }), { flat }));
    const own = placedByHand(p).map((line) =>
      line.replace(/: B0 at/, ': sar_d[0] at').replace(/: TOP at/, ': vdac at'),
    );
    expect(found).toEqual(own.sort());
    expect(found.filter((line) => / at /.test(line))).toHaveLength(p.capacitors.length + 3);
  });
});

describe('random libraries', () => {
  const coordinate = fc.integer({ min: -5000, max: 5000 });
  const point = fc.tuple(coordinate, coordinate);
  const number = fc.integer({ min: 0, max: 255 });
  const polygon = fc.record({
    layer: number,
    datatype: number,
    xy: fc.uniqueArray(point, { minLength: 3, maxLength: 9, selector: String }),
  }) as fc.Arbitrary<Polygon>;
  const label = fc.record({
    text: fc.stringMatching(/^[A-Za-z0-9_]{1,9}$/),
    layer: number,
    texttype: number,
    xy: point,
  });
  const to = (name: string) =>
    fc
      .record({
        origin: point,
        columns: fc.integer({ min: 1, max: 3 }),
        rows: fc.integer({ min: 1, max: 3 }),
        columnStep: point,
        rowStep: point,
        mirrored: fc.boolean(),
        angle_deg: fc.constantFrom(0, 90, 180, 270),
      })
      .map((more) => reference(name, more));
  const libraryOf = (among: (r: Reference) => Reference) =>
    fc
      .record({
        leaf: fc.array(polygon, { minLength: 1, maxLength: 3 }),
        middle: fc.array(to('leaf').map(among), { minLength: 1, maxLength: 2 }),
        top: fc.array(polygon, { maxLength: 2 }),
        labels: fc.array(label, { maxLength: 2 }),
        // Every structure stands somewhere below the top one: the program takes any other for a top of its own.
        references: fc.array(fc.oneof(to('leaf'), to('middle')).map(among), { maxLength: 3 }),
        last: to('middle').map(among),
      })
      .map(({ leaf, middle, top, labels, references, last }) =>
        withStructures([
          structure('leaf', { polygons: leaf }),
          structure('middle', { references: middle }),
          structure('top', { polygons: top, labels, references: [...references, last] }),
        ]),
      );

  it('are read back record by record', () => {
    fc.assert(
      fc.property(
        libraryOf((r) => r),
        (p) => {
          expect(readRecords(writeStream(p)).structures).toEqual(sayable(p.structures));
        },
      ),
    );
  });

  // The program passes over mirrors, and over turns of arrays; both are in the records above.
  const understood = (r: Reference): Reference => ({
    ...r,
    mirrored: false,
    angle_deg: r.columns === 1 && r.rows === 1 ? r.angle_deg : 0,
  });
  it('are placed alike, turned and repeated', () => {
    fc.assert(
      fc.property(libraryOf(understood), (p) => {
        expect(convert(writeStream(p))).toEqual(placedByHand(p));
      }),
      { numRuns: 40 },
    );
  });
});
