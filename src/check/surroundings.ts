import type { Boxes } from '../core/boxes.js';
import { slabsOf } from '../core/slabs.js';

/** All that a region leaves free, up to a frame a nanometre around it: its connected shapes are the holes, and the one at the frame. */
export interface Surroundings {
  readonly slabs: Boxes;
  /** Whether a shape, given by its slabs, is the one outside of everything. */
  readonly isOuter: (slabs: readonly number[]) => boolean;
}

/** @param slabs a region as disjoint slabs (`unitedSlabs`). */
export function surroundingsOf(slabs: Boxes): Surroundings {
  const count = slabs.x0.length;
  if (count === 0) return { slabs, isOuter: () => true };
  const least = (values: Int32Array) => values.reduce((a, b) => Math.min(a, b));
  const most = (values: Int32Array) => values.reduce((a, b) => Math.max(a, b));
  const [x0, y0, x1, y1] = [least(slabs.x0) - 1, least(slabs.y0) - 1, most(slabs.x1) + 1, most(slabs.y1) + 1];
  const edges = {
    x0: new Int32Array(2 * count + 2),
    x1: new Int32Array(2 * count + 2),
    y: new Int32Array(2 * count + 2),
    change: new Int8Array(2 * count + 2),
  };
  for (let i = 0; i <= count; i++) {
    const inside = i < count;
    for (let side = 0; side < 2; side++) {
      edges.x0[2 * i + side] = inside ? slabs.x0[i] : x0;
      edges.x1[2 * i + side] = inside ? slabs.x1[i] : x1;
      edges.y[2 * i + side] = side === 0 ? (inside ? slabs.y0[i] : y0) : inside ? slabs.y1[i] : y1;
      edges.change[2 * i + side] = inside === (side === 0) ? -1 : 1;
    }
  }
  const free = slabsOf(edges);
  return { slabs: free, isOuter: (own) => own.some((i) => free.x0[i] === x0) };
}
