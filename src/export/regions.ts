import { BoxList } from '../core/boxes.js';
import type { Boxes } from '../core/boxes.js';
import type { Rectangle } from '../core/rectangle.js';
import { slabsOf, unitedSlabs } from '../core/slabs.js';

/** Rectangles as boxes. */
export function boxesOf(rectangles: readonly Rectangle[]): Boxes {
  const list = new BoxList();
  for (const r of rectangles) list.push(r.x0, r.y0, r.x1, r.y1);
  return list.finish();
}

export const rectanglesOf = ({ x0, y0, x1, y1 }: Boxes): Rectangle[] =>
  Array.from(x0, (left, i) => ({ x0: left, y0: y0[i], x1: x1[i], y1: y1[i] }));

/** Both lists, one after the other. */
const together = (a: Boxes, b: Boxes): Boxes => boxesOf([...rectanglesOf(a), ...rectanglesOf(b)]);

/** All that lies in one of them, as disjoint rectangles. */
export const united = (a: Boxes, b: Boxes): Boxes => unitedSlabs(together(a, b));

/** What lies in `a` and not in `b`, as disjoint rectangles. */
export function without(a: Boxes, b: Boxes): Boxes {
  const [whole, hole] = [united(a, b), unitedSlabs(b)];
  // The hole lies in the whole, and neither overlaps itself: every winding number is 1 or 0.
  const both = together(whole, hole);
  const count = both.x0.length;
  const isHole = (i: number) => i % count >= whole.x0.length;
  return slabsOf({
    x0: Int32Array.from([...both.x0, ...both.x0]),
    x1: Int32Array.from([...both.x1, ...both.x1]),
    y: Int32Array.from([...both.y0, ...both.y1]),
    change: Int8Array.from({ length: 2 * count }, (_, i) => (isHole(i) === i < count ? -1 : 1)),
  });
}

/** The area that they cover, what they share counted once. */
export function areaOf(boxes: Boxes): number {
  const { x0, y0, x1, y1 } = unitedSlabs(boxes);
  return x0.reduce((sum, left, i) => sum + (x1[i] - left) * (y1[i] - y0[i]), 0);
}
