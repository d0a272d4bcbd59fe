import { readFileSync } from 'node:fs';
import type { Polygon, Reference, Structure } from '../../src/core/layout.js';
import { Random } from '../../src/core/random.js';
import type { Floorplan } from '../../src/spec/floorplan.js';
import type { Polygons } from '../../src/spec/polygons.js';

const fixture = (file: string): unknown =>
  JSON.parse(readFileSync(new URL(`../fixtures/kiln4/${file}`, import.meta.url), 'utf8'));

export const kilnFloorplan = (): Floorplan => fixture('kiln4.floorplan.json') as Floorplan;
export const kilnPolygons = (): Polygons => fixture('kiln4.polygons.json') as Polygons;

/** Another list with the same technology. */
export const withStructures = (structures: readonly Structure[], topStructure = 'top'): Polygons => ({
  ...kilnPolygons(),
  topStructure,
  structures,
});

export const structure = (name: string, parts: Partial<Structure> = {}): Structure => ({
  name,
  polygons: [],
  references: [],
  labels: [],
  ...parts,
});

export const rectangle = (x0: number, y0: number, x1: number, y1: number, more: Partial<Polygon> = {}): Polygon => ({
  layer: 1,
  datatype: 0,
  xy: [
    [x0, y0],
    [x1, y0],
    [x1, y1],
    [x0, y1],
  ],
  ...more,
});

export const reference = (of: string, more: Partial<Reference> = {}): Reference => ({
  structure: of,
  origin: [0, 0],
  columns: 1,
  rows: 1,
  columnStep: [0, 0],
  rowStep: [0, 0],
  mirrored: false,
  angle_deg: 0,
  ...more,
});

/** A floorplan of `bits` bits on an odd core: pairs about the centre dealt at random, the smallest bit in the middle. */
export function randomFloorplan(bits: number, rows: number, columns: number): Floorplan {
  const cells = Array.from({ length: rows }, () => Array.from({ length: columns }, () => '-'));
  const middle = (rows * columns - 1) / 2;
  const free = Array.from({ length: middle }, (_, i) => i);
  const random = new Random(bits);
  const put = (cell: number, name: string) => (cells[Math.floor(cell / columns)][cell % columns] = name);
  put(middle, 'B0');
  for (let bit = 1; bit < bits; bit++)
    for (let pair = 0; pair < 2 ** (bit - 1); pair++) {
      const [cell] = free.splice(random.below(free.length), 1);
      put(cell, `B${bit}`);
      put(2 * middle - cell, `B${bit}`);
    }
  const capacitors = Array.from({ length: bits }, (_, i) => ({
    name: `B${i}`,
    role: 'bit' as const,
    weight: 2 ** i,
    units: 2 ** i,
  }));
  return {
    format: 'steelyard/floorplan',
    version: 1,
    name: `random${bits}`,
    core: { rows, columns, pitch_um: [7.2, 5.7] },
    capacitors,
    cells,
  };
}
