import type { Boxes } from '../../src/core/boxes.js';
import type { Random } from '../../src/core/random.js';

/** Boxes from corner coordinates, for tests. */
export const boxesFrom = (corners: readonly (readonly [x0: number, y0: number, x1: number, y1: number])[]): Boxes => ({
  x0: Int32Array.from(corners, (c) => c[0]),
  y0: Int32Array.from(corners, (c) => c[1]),
  x1: Int32Array.from(corners, (c) => c[2]),
  y1: Int32Array.from(corners, (c) => c[3]),
});

/** Random boxes within a square of this side, most of them small. */
export function randomBoxes(random: Random, count: number, side: number): Boxes {
  const corners = Array.from({ length: count }, () => {
    const largest = random.below(4) === 0 ? side : Math.ceil(side / 3);
    const [x, y] = [random.below(side), random.below(side)];
    const [width, height] = [1 + random.below(largest), 1 + random.below(largest)];
    return [x, y, Math.min(side, x + width), Math.min(side, y + height)] as const;
  });
  return boxesFrom(corners);
}

/** Whether box `i` covers the unit square with this lower left corner. */
export const covers = (b: Boxes, i: number, x: number, y: number): boolean =>
  b.x0[i] <= x && x < b.x1[i] && b.y0[i] <= y && y < b.y1[i];
