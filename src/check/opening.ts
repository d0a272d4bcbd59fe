import type { Boxes } from '../core/boxes.js';
import { BoxList, transposed } from '../core/boxes.js';
import { unitedSlabs } from '../core/slabs.js';

/** The slabs with `by` taken off their right ends: where the left side of an interval of length `by` may stand within the region. */
function shortened(slabs: Boxes, by: number): Boxes {
  const kept = new BoxList();
  for (let i = 0; i < slabs.x0.length; i++)
    if (slabs.x1[i] - slabs.x0[i] > by) kept.push(slabs.x0[i], slabs.y0[i], slabs.x1[i] - by, slabs.y1[i]);
  return kept.finish();
}

/**
 * The part of a region in which a square of this side fits (the region's opening by the square), as slabs.
 *
 * Erosion by a square is erosion along x, then along y, and slabs are maximal along x. Sides are whole numbers: a square of side s fits
 * where one of side s - 1 fits with room to move, so that what remains has an area.
 */
export function openingBy(side: number, slabs: Boxes): Boxes {
  const room = side - 1;
  const eroded = transposed(shortened(unitedSlabs(transposed(shortened(slabs, room))), room));
  return unitedSlabs({ ...eroded, x1: eroded.x1.map((x) => x + room), y1: eroded.y1.map((y) => y + room) });
}
