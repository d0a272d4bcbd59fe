import { Clipper, FillRule } from 'clipper2-ts';
import { expect, it } from 'vitest';
import { overlapArea } from '../../src/check/overlap-area.js';
import type { Boxes } from '../../src/core/boxes.js';
import { Random } from '../../src/core/random.js';
import { covers, randomBoxes } from '../core/boxes.js';

const side = 20;
const all = (boxes: Boxes) => Array.from(boxes.x0, (_, i) => i);

it('the area that two sets of boxes share is what counting squares gives, and another library', () => {
  const wrong: string[] = [];
  for (let seed = 1; seed <= 1500; seed++) {
    const random = new Random(seed);
    const [a, b] = [randomBoxes(random, 1 + (seed % 6), side), randomBoxes(random, 1 + (seed % 4), side)];
    let squares = 0;
    for (let y = 0; y < side; y++)
      for (let x = 0; x < side; x++)
        if (all(a).some((i) => covers(a, i, x, y)) && all(b).some((i) => covers(b, i, x, y))) squares++;
    const paths = (boxes: Boxes) =>
      all(boxes).map((i) => [
        { x: boxes.x0[i], y: boxes.y0[i] },
        { x: boxes.x1[i], y: boxes.y0[i] },
        { x: boxes.x1[i], y: boxes.y1[i] },
        { x: boxes.x0[i], y: boxes.y1[i] },
      ]);
    const other = Clipper.areaPaths(Clipper.intersect(paths(a), paths(b), FillRule.NonZero));
    const found = overlapArea(a, all(a), b, all(b));
    if (found !== squares || other !== squares) wrong.push(`seed ${seed}: ${found}, ${other}, counted ${squares}`);
  }
  expect(wrong).toEqual([]);
});
