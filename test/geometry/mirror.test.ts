import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { checkPolygons } from '../../src/check/polygons.js';
import { flatten } from '../../src/core/flatten.js';
import type { Structure } from '../../src/core/layout.js';
import { type Axis, mirrorImage } from '../../src/geometry/mirror.js';
import type { Polygons } from '../../src/spec/polygons.js';

const kiln4 = JSON.parse(readFileSync('test/fixtures/kiln4/kiln4.polygons.json', 'utf8')) as Polygons;
const width = 36_120;
const height = 43_440;

const image = (p: Polygons, axis: Axis): Polygons => {
  const mirrored = (s: Structure) => mirrorImage(s, axis, axis === 'x' ? width : height);
  return { ...p, structures: p.structures.map((s) => (s.name === p.topStructure ? mirrored(s) : s)) };
};

/** Every rectangle of every layer, cell and label by its place, in one order. */
function everything(p: Polygons, move = (x: number, y: number): [number, number] => [x, y]): string[] {
  const flat = flatten(p.structures, p.topStructure);
  const boxes = [...flat.layers].flatMap(([key, { x0, y0, x1, y1, cell }]) =>
    Array.from(x0, (_, i) => {
      const [ax, ay] = move(x0[i], y0[i]);
      const [bx, by] = move(x1[i], y1[i]);
      const corners = [Math.min(ax, bx), Math.min(ay, by), Math.max(ax, bx), Math.max(ay, by)];
      return `${key} ${corners.join(' ')} ${flat.cells[cell[i]]?.name ?? ''}`;
    }),
  );
  return [...boxes, ...flat.labels.map(({ text, xy }) => `${text} ${move(...xy).join(' ')}`)].sort();
}

describe.each([
  ['x', (x: number, y: number): [number, number] => [width - x, y]],
  ['y', (x: number, y: number): [number, number] => [x, height - y]],
] as const)('mirrored in %s', (axis, move) => {
  const once = image(kiln4, axis);

  it('everything lies at its image, and the drawing is as sound', () => {
    expect(everything(once)).toEqual(everything(kiln4, move));
    expect(checkPolygons(once)).toEqual([]);
  });

  it('outlines go counter-clockwise from their lowest, then leftmost point', () => {
    for (const { xy } of once.structures.flatMap((s) => s.polygons)) {
      const doubled = xy.reduce(
        (sum, [x, y], i) => sum + x * xy[(i + 1) % xy.length][1] - y * xy[(i + 1) % xy.length][0],
        0,
      );
      expect(doubled).toBeGreaterThan(0);
      const [first] = [...xy].sort((a, b) => a[1] - b[1] || a[0] - b[0]);
      expect(xy[0]).toEqual(first);
    }
  });

  it('twice is the drawing itself, and both ways come to half a turn', () => {
    expect(image(once, axis)).toEqual(kiln4);
    expect(image(image(kiln4, 'x'), 'y')).toEqual(image(image(kiln4, 'y'), 'x'));
    expect(image(image(kiln4, 'x'), 'y').structures.at(-1)!.references[0]).toMatchObject({
      mirrored: false,
      angle_deg: 180,
    });
  });
});
