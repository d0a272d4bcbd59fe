import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { parseGDS, RecordType } from 'gdsii';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Point, Polygon, Reference, Structure } from '../../src/core/layout.js';
import { writeStream } from '../../src/export/gdsii.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { kilnPolygons, reference, structure, withStructures } from '../export/arrays.js';

// Two readers that have nothing to do with this project: the npm package gdsii (records) and Debian's gdsiiconvert, which places the
// instances of references by its own arithmetic.

let directory = '';
beforeAll(() => (directory = mkdtempSync(join(tmpdir(), 'stream-'))));
afterAll(() => rmSync(directory, { recursive: true }));

/** The structures as the records tell them. */
function readRecords(bytes: Uint8Array): { units: unknown; structures: Structure[] } {
  const structures: { -readonly [K in keyof Structure]: Structure[K][number][] | string }[] = [];
  let units: unknown;
  let fields = new Map<RecordType, unknown>();
  let kind: RecordType | undefined;
  for (const { tag, data } of parseGDS(new Uint8Array(bytes))) {
    if (tag === RecordType.UNITS) units = data;
    else if (tag === RecordType.STRNAME) structures.push({ name: data, polygons: [], references: [], labels: [] });
    else if ([RecordType.BOUNDARY, RecordType.SREF, RecordType.AREF, RecordType.TEXT].includes(tag)) {
      kind = tag;
      fields = new Map();
    } else if (tag === RecordType.ENDEL) {
      const into = structures.at(-1) as unknown as { polygons: unknown[]; references: unknown[]; labels: unknown[] };
      const xy = fields.get(RecordType.XY) as [number, number][];
      if (kind === RecordType.BOUNDARY) {
        expect(xy.at(-1)).toEqual(xy[0]);
        into.polygons.push({
          layer: fields.get(RecordType.LAYER),
          datatype: fields.get(RecordType.DATATYPE),
          xy: xy.slice(0, -1),
        });
      } else if (kind === RecordType.TEXT)
        into.labels.push({
          text: fields.get(RecordType.STRING),
          layer: fields.get(RecordType.LAYER),
          texttype: fields.get(RecordType.TEXTTYPE),
          xy: xy[0],
        });
      else {
        const { columns, rows } = (fields.get(RecordType.COLROW) ?? { columns: 1, rows: 1 }) as Reference;
        const step = (end: number, count: number) => xy[end].map((value, i) => (value - xy[0][i]) / count);
        const strans = ((fields.get(RecordType.STRANS) as number | undefined) ?? 0) & 0xffff;
        expect([0, 0x8000]).toContain(strans);
        expect(xy).toHaveLength(kind === RecordType.AREF ? 3 : 1);
        into.references.push({
          structure: fields.get(RecordType.SNAME),
          origin: xy[0],
          columns,
          rows,
          columnStep: kind === RecordType.AREF ? step(1, columns) : [0, 0],
          rowStep: kind === RecordType.AREF ? step(2, rows) : [0, 0],
          mirrored: strans === 0x8000,
          angle_deg: fields.get(RecordType.ANGLE) ?? 0,
        });
      }
    } else fields.set(tag, data);
  }
  return { units, structures: structures as unknown as Structure[] };
}

/** What a stream file can say of the structures: no nets, no parts, no cells; steps only where something repeats. */
const sayable = (structures: readonly Structure[]): Structure[] =>
  structures.map(({ name, polygons, references, labels }) => ({
    name,
    polygons: polygons.map(({ layer, datatype, xy }) => ({ layer, datatype, xy })),
    references: references.map(({ cells: _, ...r }) =>
      r.columns === 1 && r.rows === 1 ? { ...r, columnStep: [0, 0], rowStep: [0, 0] } : r,
    ),
    labels,
  }));

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

/** The same by brute force: every instance in turn, complex numbers for points. */
function placed(p: Polygons): string[] {
  const found: string[] = [];
  type Move = (point: Point) => Point;
  const visit = (name: string, move: Move): void => {
    const s = p.structures.find((one) => one.name === name)!;
    const written = (point: Point) =>
      move(point)
        .map((value) => value + 0)
        .join(',');
    for (const q of s.polygons) found.push(`${q.layer}: ${q.xy.map(written).join(' ')}`);
    for (const l of s.labels) found.push(`${l.layer}: ${l.text} at ${written(l.xy)}`);
    for (const r of s.references)
      for (let i = 0; i < r.columns; i++)
        for (let j = 0; j < r.rows; j++)
          visit(r.structure, ([x, y]) => {
            let [re, im] = [x, r.mirrored ? -y : y];
            for (let turned = 0; turned < r.angle_deg; turned += 90) [re, im] = [-im, re];
            return move([
              re + r.origin[0] + i * r.columnStep[0] + j * r.rowStep[0],
              im + r.origin[1] + i * r.columnStep[1] + j * r.rowStep[1],
            ]);
          });
  };
  visit(p.topStructure, (point) => point);
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
    expect(found).toEqual(placed(kilnPolygons()));
    // 212 of its own and 5 in each of 35 units; 8 labels.
    expect(found).toHaveLength(212 + 5 * 35 + 8);
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
        expect(convert(writeStream(p))).toEqual(placed(p));
      }),
      { numRuns: 40 },
    );
  });
});
