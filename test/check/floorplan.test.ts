import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { checkFloorplan, comparePolygons } from '../../src/check/floorplan.js';
import type { Floorplan } from '../../src/spec/floorplan.js';
import type { Polygons } from '../../src/spec/polygons.js';

const read = (name: string): unknown => JSON.parse(readFileSync(`test/fixtures/kiln4/${name}`, 'utf8'));
const floorplan = read('kiln4.floorplan.json') as Floorplan;
const polygons = read('kiln4.polygons.json') as Polygons;

/** The floorplan with two cells exchanged. */
function exchanged(a: readonly [number, number], b: readonly [number, number]): Floorplan {
  const cells = floorplan.cells.map((row) => [...row]);
  [cells[a[0]][a[1]], cells[b[0]][b[1]]] = [cells[b[0]][b[1]], cells[a[0]][a[1]]];
  return { ...floorplan, cells };
}

const rulesOf = (f: Floorplan) => checkFloorplan(f).map((finding) => finding.rule);

describe('a floorplan', () => {
  it('that is sound has no finding', () => {
    expect(checkFloorplan(floorplan)).toEqual([]);
  });

  it('whose cells break the symmetry that its placement claims', () => {
    const f = exchanged([0, 0], [0, 1]);
    expect(checkFloorplan(f)).toMatchObject([
      { rule: 'symmetry', nets: ['B3'] },
      { rule: 'symmetry', nets: ['B2'] },
    ]);
    const { placement, ...silent } = f;
    expect(checkFloorplan(silent)).toEqual([]);
    const { proof, ...unproved } = placement!;
    expect(rulesOf({ ...f, placement: { ...unproved, method: 'point-reflected pairs' } })).toEqual([
      'symmetry',
      'symmetry',
    ]);
    expect(checkFloorplan({ ...f, placement: unproved })).toEqual([]);
    expect(proof?.class).toBe('zero-first-order');
  });

  it('whose counts are wrong', () => {
    const cells = floorplan.cells.map((row, r) => row.map((cell, c) => (r === 2 && c === 1 ? 'B9' : cell)));
    const [first, second] = checkFloorplan({ ...floorplan, cells });
    expect([first, second]).toMatchObject([
      { rule: 'cell-count', nets: ['B0'] },
      { rule: 'cell-count', nets: ['B9'], at_um: [0, 0] },
    ]);
    expect(rulesOf({ ...floorplan, cells: floorplan.cells.slice(0, 4) })).toContain('cell-count');
    expect(rulesOf({ ...floorplan, cells: floorplan.cells.map((row) => row.slice(0, 2)) })).toContain('cell-count');
  });

  it('whose termination stands where it may not, or is missing', () => {
    const at = (row: number, column: number) => ({
      ...floorplan,
      ringUnits: [{ capacitor: 'TERM', row, column }],
    });
    expect(checkFloorplan(at(5, 2))).toEqual([]);
    expect(checkFloorplan(at(5, 3))).toMatchObject([{ rule: 'ring', at_um: [14.4, -17.1] }]);
    expect(rulesOf(at(2, 1))).toEqual(['ring']);
    expect(rulesOf(at(6, 1))).toEqual(['ring']);
    const { ringUnits, ...none } = floorplan;
    expect(ringUnits).toHaveLength(1);
    expect(rulesOf(none)).toEqual(['cell-count', 'ring']);
  });
});

describe('a drawing against a floorplan', () => {
  it('that it was drawn from', () => {
    expect(comparePolygons(polygons, floorplan)).toEqual([]);
  });

  it('that has other cells, another name, other capacitors, another core', () => {
    const other = comparePolygons(polygons, exchanged([0, 0], [0, 1]));
    expect(other).toMatchObject([
      { rule: 'other-floorplan', nets: ['B2', 'B3'], at_um: [10.86, 34.84] },
      { rule: 'other-floorplan', nets: ['B3', 'B2'], at_um: [18.06, 34.84] },
    ]);
    expect(comparePolygons(polygons, { ...floorplan, name: 'kiln5' })).toHaveLength(1);
    const capacitors = floorplan.capacitors.map((c) => (c.name === 'B3' ? { ...c, units: 9 } : c));
    expect(comparePolygons(polygons, { ...floorplan, capacitors })).toHaveLength(2);
    const core = { ...floorplan.core, rows: 4 };
    expect(comparePolygons(polygons, { ...floorplan, core })).toHaveLength(1);
    expect(
      comparePolygons(polygons, { ...floorplan, ringUnits: [{ capacitor: 'TERM', row: 5, column: 1 }] }),
    ).toHaveLength(2);
  });

  it('with fill dummies whose top plates are on the common plate', () => {
    const reference = { ...polygons.structures[1].references[0] };
    const cells = reference.cells!.map((cell) => (cell === 'B0' ? '=' : cell));
    const structures = [polygons.structures[0], { ...polygons.structures[1], references: [{ ...reference, cells }] }];
    const plan = floorplan.cells.map((row) => row.map((cell) => (cell === 'B0' ? '-' : cell)));
    expect(comparePolygons({ ...polygons, structures }, { ...floorplan, cells: plan })).toEqual([]);
    expect(comparePolygons({ ...polygons, structures }, floorplan)).toMatchObject([{ nets: ['=', 'B0'] }]);
  });
});
