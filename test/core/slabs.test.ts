import { Clipper, FillRule } from 'clipper2-ts';
import { describe, expect, it } from 'vitest';
import { rectanglesOf } from '../../src/core/flatten.js';
import type { Point } from '../../src/core/layout.js';
import { Random } from '../../src/core/random.js';
import { differingSlabs, unitedSlabs } from '../../src/core/slabs.js';
import { boxesFrom, covers, randomBoxes } from './boxes.js';

const side = 14;

/** Winding number of a closed outline around the middle of a unit square, by counting the edges to its right. */
function winding(xy: readonly Point[], px: number, py: number): number {
  let turns = 0;
  xy.forEach(([x, y], i) => {
    const nextY = xy[(i + 1) % xy.length][1];
    if (x <= px) return;
    if (y <= py && nextY > py) turns++;
    if (nextY <= py && y > py) turns--;
  });
  return turns;
}

function expectSlabs(slabs: ReturnType<typeof unitedSlabs>, inside: (x: number, y: number) => boolean): void {
  const times = (px: number, py: number) => {
    let count = 0;
    for (let i = 0; i < slabs.x0.length; i++) if (covers(slabs, i, px, py)) count++;
    return count;
  };
  const wrong: string[] = [];
  for (let y = -1; y <= side; y++)
    for (let x = -1; x <= side; x++) if (times(x, y) !== (inside(x, y) ? 1 : 0)) wrong.push(`${x}, ${y}`);
  // Maximal along x: beyond either end lies none of the region, at any height of the slab.
  for (let i = 0; i < slabs.x0.length; i++)
    for (let y = slabs.y0[i]; y < slabs.y1[i]; y++)
      if (inside(slabs.x0[i] - 1, y) || inside(slabs.x1[i], y)) wrong.push(`slab ${i} at ${y}`);
  expect(wrong).toEqual([]);
}

describe('slabs', () => {
  it('cover the union of random boxes, each square once, and reach from end to end', () => {
    for (let seed = 1; seed <= 300; seed++) {
      const boxes = randomBoxes(new Random(seed), 1 + (seed % 12), side);
      expectSlabs(unitedSlabs(boxes), (x, y) => Array.from(boxes.x0).some((_, i) => covers(boxes, i, x, y)));
    }
  });

  it('cover what only one of two random regions covers', () => {
    for (let seed = 1; seed <= 300; seed++) {
      const random = new Random(seed);
      const [a, b] = [0, 1].map(() => unitedSlabs(randomBoxes(random, 1 + random.below(9), side)));
      const within = (boxes: typeof a, x: number, y: number) =>
        Array.from(boxes.x0).some((_, i) => covers(boxes, i, x, y));
      expectSlabs(differingSlabs(a, b), (x, y) => within(a, x, y) !== within(b, x, y));
      expect(differingSlabs(a, a).x0).toHaveLength(0);
    }
  });

  it('cover what a random outline winds around, crossing itself or not', () => {
    for (let seed = 1; seed <= 300; seed++) {
      const random = new Random(seed);
      const corners = 2 + random.below(6);
      const xs = Array.from({ length: corners }, () => random.below(side));
      const ys = Array.from({ length: corners }, () => random.below(side));
      const xy = xs.flatMap((x, i): Point[] => [
        [x, ys[i]],
        [xs[(i + 1) % corners], ys[i]],
      ]);
      expectSlabs(rectanglesOf(xy), (x, y) => winding(xy, x, y) !== 0);
    }
  });

  it('have the area that a polygon library gives the union', () => {
    for (let seed = 1; seed <= 200; seed++) {
      const boxes = randomBoxes(new Random(seed), 30, 200);
      const paths = Array.from(boxes.x0, (x0, i) => [
        { x: x0, y: boxes.y0[i] },
        { x: boxes.x1[i], y: boxes.y0[i] },
        { x: boxes.x1[i], y: boxes.y1[i] },
        { x: x0, y: boxes.y1[i] },
      ]);
      const union = Clipper.union(paths, FillRule.NonZero);
      const slabs = unitedSlabs(boxes);
      const area = slabs.x0.reduce((sum, x0, i) => sum + (slabs.x1[i] - x0) * (slabs.y1[i] - slabs.y0[i]), 0);
      expect(area).toBe(Clipper.areaPaths(union));
    }
  });

  it('take a comb of a million points apart into its teeth', () => {
    const teeth = 250_000;
    const xy: [number, number][] = [
      [0, 0],
      [2 * teeth, 0],
    ];
    // Teeth of two heights, so that no two neighbours end together.
    for (let tooth = teeth - 1; tooth >= 0; tooth--) {
      const top = 10 + (tooth % 2);
      xy.push([2 * tooth + 2, 5], [2 * tooth + 1, 5], [2 * tooth + 1, top], [2 * tooth, top]);
    }
    const rectangles = rectanglesOf(xy);
    expect(rectangles.x0.length).toBe(teeth + 1);
    const area = rectangles.x0.reduce(
      (sum, x0, i) => sum + (rectangles.x1[i] - x0) * (rectangles.y1[i] - rectangles.y0[i]),
      0,
    );
    expect(area).toBe(10 * teeth + (5 * teeth) / 2 + (6 * teeth) / 2);
  });

  it('are none for no boxes', () => {
    expect(unitedSlabs(boxesFrom([])).x0.length).toBe(0);
  });
});
