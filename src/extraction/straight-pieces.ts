import type { Boxes } from '../core/boxes.js';
import { BoxIndex, BoxList, transposed } from '../core/boxes.js';
import { componentsOf } from '../core/components.js';
import { unitedSlabs } from '../core/slabs.js';

/**
 * What boxes of one layer cover, as disjoint straight pieces of wire that meet in parts of their sides: however it was drawn, the same
 * pieces. A shape is cut along all its horizontal edges or along all its vertical ones, whichever gives fewer pieces, so that a long wire
 * with branches stays one piece and one that changes its width is cut there.
 *
 *     +--+            +--+
 *     |  |            |  |
 *     |  +----+       |  |----+     strap with tabs: three pieces, not five
 *     |  +----+       |  |----+
 *     |  |            |  |
 *     |  +----+       |  |----+
 *     |  +----+       |  |----+
 *     +--+            +--+
 */
export function straightPieces(boxes: Boxes): Boxes {
  const { count, of } = componentsOf(boxes, new BoxIndex(boxes));
  const members: number[][] = Array.from({ length: count }, () => []);
  of.forEach((shape, box) => members[shape].push(box));
  const pieces = new BoxList();
  const push = (b: Boxes, i: number) => pieces.push(b.x0[i], b.y0[i], b.x1[i], b.y1[i]);
  for (const own of members) {
    if (own.length === 1) {
      push(boxes, own[0]);
      continue;
    }
    const list = new BoxList();
    for (const i of own) list.push(boxes.x0[i], boxes.y0[i], boxes.x1[i], boxes.y1[i]);
    const shape = list.finish();
    const flat = unitedSlabs(shape);
    const upright = transposed(unitedSlabs(transposed(shape)));
    const fewer = upright.x0.length < flat.x0.length ? upright : flat;
    for (let i = 0; i < fewer.x0.length; i++) push(fewer, i);
  }
  return pieces.finish();
}
