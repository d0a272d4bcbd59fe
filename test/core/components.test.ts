import { describe, expect, it } from 'vitest';
import { boxesJoin, componentsOf, DisjointSets } from '../../src/core/components.js';
import { Random } from '../../src/core/random.js';
import { boxesFrom, covers, randomBoxes } from './boxes.js';

describe('boxes join', () => {
  it('by overlap or a shared edge, never by a corner', () => {
    const boxes = boxesFrom([
      [0, 0, 4, 4],
      [4, 1, 6, 2],
      [4, 4, 6, 6],
      [3, 3, 5, 5],
      [7, 0, 8, 1],
    ]);
    const joined = [1, 2, 3, 4].map((j) => boxesJoin(boxes, 0, boxes, j));
    expect(joined).toEqual([true, false, true, false]);
  });
});

describe('components', () => {
  it('are those that flooding the plane square by square gives', () => {
    for (let seed = 1; seed <= 300; seed++) {
      const side = 16;
      const boxes = randomBoxes(new Random(seed), 2 + (seed % 15), side);
      const flood = new Int32Array(side * side).fill(-1);
      const filled = (x: number, y: number) =>
        x >= 0 && y >= 0 && x < side && y < side && Array.from(boxes.x0).some((_, i) => covers(boxes, i, x, y));
      let next = 0;
      for (let start = 0; start < side * side; start++) {
        if (flood[start] >= 0 || !filled(start % side, Math.floor(start / side))) continue;
        const open = [start];
        flood[start] = next;
        while (open.length > 0) {
          const at = open.pop()!;
          const [x, y] = [at % side, Math.floor(at / side)];
          for (const [nx, ny] of [
            [x + 1, y],
            [x - 1, y],
            [x, y + 1],
            [x, y - 1],
          ])
            if (filled(nx, ny) && flood[ny * side + nx] < 0) {
              flood[ny * side + nx] = next;
              open.push(ny * side + nx);
            }
        }
        next++;
      }
      const { count, of } = componentsOf(boxes);
      expect(count).toBe(next);
      const seen = Array.from(of, (_, i) => flood[boxes.y0[i] * side + boxes.x0[i]]);
      const pairs = Array.from(of, (_, i) => Array.from(of, (_, j) => [i, j])).flat();
      expect(pairs.filter(([i, j]) => (of[i] === of[j]) !== (seen[i] === seen[j]))).toEqual([]);
    }
  });

  it('are numbered in order of their first members', () => {
    const sets = new DisjointSets(6);
    sets.join(5, 1);
    sets.join(4, 2);
    sets.join(2, 5);
    expect(Array.from(sets.numbered().of)).toEqual([0, 1, 1, 2, 1, 1]);
  });
});
