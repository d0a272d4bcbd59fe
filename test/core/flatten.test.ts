import { describe, expect, it } from 'vitest';
import { flatten, placed, slantedEdges } from '../../src/core/flatten.js';
import type { Point, Reference, Structure } from '../../src/core/layout.js';
import { InputError } from '../../src/core/problem.js';

const structure = (
  name: string,
  polygons: Structure['polygons'],
  references: readonly Reference[] = [],
): Structure => ({
  name,
  polygons,
  references,
  labels: [],
});

const reference = (of: string, more: Partial<Reference> = {}): Reference => ({
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

const flag: Point[] = [
  [0, 0],
  [1, 0],
  [1, 6],
  [4, 6],
  [4, 8],
  [0, 8],
];

describe('flatten', () => {
  it('mirrors about the x axis, then turns, then moves', () => {
    for (const mirrored of [false, true])
      for (const angle_deg of [0, 90, 180, 270, 360]) {
        const unit = structure('unit', [{ layer: 1, datatype: 0, xy: flag }]);
        const top = structure('top', [], [reference('unit', { mirrored, angle_deg, origin: [100, 50] })]);
        const flat = flatten([unit, top], 'top');
        // The same with sines and cosines, point by point.
        const turn = (angle_deg * Math.PI) / 180;
        const wanted = flag.map(([x, y]) => {
          const flipped = mirrored ? -y : y;
          return [
            100 + Math.round(x * Math.cos(turn) - flipped * Math.sin(turn)),
            50 + Math.round(x * Math.sin(turn) + flipped * Math.cos(turn)),
          ];
        });
        expect(flag.map(([x, y]) => placed(flat.shapes.place[0], x, y))).toEqual(wanted);
        const layer = flat.layers.get('1/0')!;
        expect(Math.min(...layer.x0)).toBe(Math.min(...wanted.map((point) => point[0])));
        expect(Math.max(...layer.y1)).toBe(Math.max(...wanted.map((point) => point[1])));
        const area = layer.x0.reduce((sum, x0, i) => sum + (layer.x1[i] - x0) * (layer.y1[i] - layer.y0[i]), 0);
        expect(area).toBe(14);
      }
  });

  it('goes through nested references, the outer turn over the inner one', () => {
    const dot = structure('dot', [
      {
        layer: 1,
        datatype: 0,
        xy: [
          [2, 0],
          [3, 0],
          [3, 1],
          [2, 1],
        ],
      },
    ]);
    const inner = structure('inner', [], [reference('dot', { angle_deg: 90, origin: [10, 0] })]);
    const top = structure('top', [], [reference('inner', { mirrored: true, origin: [0, 100] })]);
    const layer = flatten([dot, inner, top], 'top').layers.get('1/0')!;
    // dot 2..3 by 0..1, turned: -1..0 by 2..3, moved: 9..10 by 2..3, mirrored: by -3..-2, moved: by 97..98
    expect([layer.x0[0], layer.y0[0], layer.x1[0], layer.y1[0]]).toEqual([9, 97, 10, 98]);
  });

  it('says for each shape which cell of which reference it comes from', () => {
    const unit = structure('unit', [
      {
        layer: 1,
        datatype: 0,
        xy: [
          [0, 0],
          [1, 0],
          [1, 1],
          [0, 1],
        ],
      },
    ]);
    const cells = ['B0', 'B1', '-', 'B1', 'B1', '='];
    const top = structure(
      'top',
      [
        {
          layer: 1,
          datatype: 0,
          xy: [
            [50, 0],
            [51, 0],
            [51, 1],
            [50, 1],
          ],
        },
      ],
      [reference('unit'), reference('unit', { columns: 3, rows: 2, columnStep: [5, 0], rowStep: [0, 7], cells })],
    );
    const flat = flatten([unit, top], 'top');
    expect(flat.cells.map((cell) => cell.name)).toEqual(cells);
    expect(flat.cells[4]).toEqual({
      name: 'B1',
      structure: 'unit',
      parent: 'top',
      reference: 1,
      instance: 4,
      column: 1,
      row: 1,
      at: [5, 7],
    });
    const layer = flat.layers.get('1/0')!;
    expect(Array.from(layer.cell)).toEqual([-1, -1, 0, 1, 2, 3, 4, 5]);
    expect(Array.from(layer.shape)).toEqual([0, 1, 2, 3, 4, 5, 6, 7]);
  });

  it('takes a slanted edge as an L, along x first', () => {
    const xy: Point[] = [
      [0, 0],
      [4, 0],
      [4, 3],
    ];
    expect(slantedEdges(xy)).toEqual([2]);
    const layer = flatten([structure('top', [{ layer: 1, datatype: 0, xy }])], 'top').layers.get('1/0')!;
    expect([layer.x0[0], layer.y0[0], layer.x1[0], layer.y1[0]]).toEqual([0, 0, 4, 3]);
  });

  it('refuses structures that are missing or hold themselves, and drawings beyond all bounds', () => {
    const pointers = (structures: Structure[]) => {
      try {
        flatten(structures, 'top');
      } catch (error) {
        if (error instanceof InputError) return error.problems.map((problem) => problem.pointer);
        throw error;
      }
      return [];
    };
    expect(pointers([])).toEqual(['/topStructure']);
    expect(pointers([structure('top', [], [reference('gone')])])).toEqual(['/structures/0/references/0/structure']);
    const a = structure('a', [], [reference('top')]);
    expect(pointers([a, structure('top', [], [reference('a')])])).toEqual(['/structures/0/references/0/structure']);
    const many = reference('unit', { columns: 30000, rows: 30000 });
    expect(pointers([structure('unit', []), structure('top', [], [many])])).toEqual(['/topStructure']);
  });
});
