import { BoxIndex } from '../core/boxes.js';
import type { Corners, Quadrants, Side } from './boundary.js';

/** Two pieces of boundary that face each other: where the middle between them is, and how far apart they are (squared, nm2). */
export type SeeDistance = (x: number, y: number, squared: number) => void;

/** An index of corners or sides for searches; `upright` sides are left and right ones. */
const cornerIndex = (c: Corners): BoxIndex => new BoxIndex({ x0: c.x, y0: c.y, x1: c.x, y1: c.y });
const sideIndex = (s: Side): BoxIndex => new BoxIndex({ x0: s.from, y0: s.at, x1: s.to, y1: s.at });

/**
 * Visits each pair of a segment of `low` and a segment of `high` that lies above it by less than `reach` and overlaps it in projection.
 * `x` of the visit runs along the segments.
 */
function facing(low: Side, high: Side, index: BoxIndex, reach: number, see: SeeDistance): void {
  for (let i = 0; i < low.at.length; i++) {
    const y = low.at[i];
    for (const j of index.search(low.from[i], y, low.to[i], y + reach - 1)) {
      const from = Math.max(low.from[i], high.from[j]);
      const to = Math.min(low.to[i], high.to[j]);
      if (from < to) see((from + to) / 2, (y + high.at[j]) / 2, (high.at[j] - y) * (high.at[j] - y));
    }
  }
}

/** Visits each pair of a corner of `low` and one of `high`, above it or level and to its right (`right` 1) or left (-1) or above it. */
function diagonal(low: Corners, high: Corners, index: BoxIndex, right: 1 | -1, reach: number, see: SeeDistance): void {
  const limit = reach * reach;
  for (let i = 0; i < low.x.length; i++) {
    const x = low.x[i];
    const y = low.y[i];
    const far = x + right * (reach - 1);
    for (const j of index.search(Math.min(x, far), y, Math.max(x, far), y + reach - 1)) {
      const dx = high.x[j] - x;
      const dy = high.y[j] - y;
      if (dx * dx + dy * dy < limit) see(x + dx / 2, y + dy / 2, dx * dx + dy * dy);
    }
  }
}

/** What looks at each other across a gap: the sides and corners of a region across its exterior, or across its interior. */
export interface Faces {
  /** Segments that look up, down, to the right and to the left. */
  readonly up: Side;
  readonly down: Side;
  readonly right: Side;
  readonly left: Side;
  /** Corners by the quadrant they look into. */
  readonly corners: Quadrants<Corners>;
}

export interface IndexedFaces extends Faces {
  readonly downIndex: BoxIndex;
  readonly leftIndex: BoxIndex;
  readonly lowerLeftIndex: BoxIndex;
  readonly lowerRightIndex: BoxIndex;
}

export const indexed = (faces: Faces): IndexedFaces => ({
  ...faces,
  downIndex: sideIndex(faces.down),
  leftIndex: sideIndex(faces.left),
  lowerLeftIndex: cornerIndex(faces.corners[2]),
  lowerRightIndex: cornerIndex(faces.corners[3]),
});

/**
 * Visits the places where something of `a` and something of `b` that lies above or to the right of it look at each other from less than
 * `reach`: parallel segments that overlap in projection, and corners (Euclidean distance).
 */
export function closeFaces(a: Faces, b: IndexedFaces, reach: number, see: SeeDistance): void {
  facing(a.up, b.down, b.downIndex, reach, see);
  facing(a.right, b.left, b.leftIndex, reach, (y, x, squared) => see(x, y, squared));
  diagonal(a.corners[0], b.corners[2], b.lowerLeftIndex, 1, reach, see);
  diagonal(a.corners[1], b.corners[3], b.lowerRightIndex, -1, reach, see);
}
