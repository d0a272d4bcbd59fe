import type { Boxes } from '../core/boxes.js';
import { orderBy } from '../core/order.js';

/** Boundary segments of one side of a region, sorted by `at`, then `from`: x of left and right sides, y of bottoms and tops. */
export interface Side {
  readonly at: Int32Array;
  readonly from: Int32Array;
  readonly to: Int32Array;
}

/** Corners that look the same way. */
export interface Corners {
  readonly x: Int32Array;
  readonly y: Int32Array;
}

/** The quadrants around a point, counter-clockwise from the upper right one; the opposite of q is q + 2 modulo 4. */
export type Quadrants<T> = readonly [upperRight: T, upperLeft: T, lowerLeft: T, lowerRight: T];

export interface Boundary {
  readonly left: Side;
  readonly right: Side;
  readonly bottom: Side;
  readonly top: Side;
  /** Corners with the region in that quadrant alone. Where two quadrants meet at a point only, it is a corner of either. */
  readonly convex: Quadrants<Corners>;
  /** Corners with the region everywhere but in that quadrant. */
  readonly reflex: Quadrants<Corners>;
}

/** Segments in order, those that continue each other made one. */
function sortedSide(at: Int32Array, from: Int32Array, to: Int32Array): Side {
  const order = orderBy(at, from);
  const side = { at: new Int32Array(at.length), from: new Int32Array(at.length), to: new Int32Array(at.length) };
  let count = 0;
  for (const i of order) {
    if (count > 0 && side.at[count - 1] === at[i] && side.to[count - 1] === from[i]) side.to[count - 1] = to[i];
    else {
      side.at[count] = at[i];
      side.from[count] = from[i];
      side.to[count++] = to[i];
    }
  }
  return { at: side.at.subarray(0, count), from: side.from.subarray(0, count), to: side.to.subarray(0, count) };
}

/** What is in `a` and not in `b`, line by line. Within either the segments of a line are disjoint. */
function remaining(a: Side, b: Side): Side {
  const at: number[] = [];
  const from: number[] = [];
  const to: number[] = [];
  for (let i = 0, j = 0; i < a.at.length; i++) {
    while (j < b.at.length && (b.at[j] < a.at[i] || (b.at[j] === a.at[i] && b.to[j] <= a.from[i]))) j++;
    let start = a.from[i];
    for (let k = j; k < b.at.length && b.at[k] === a.at[i] && b.from[k] < a.to[i]; k++) {
      if (b.from[k] > start) {
        at.push(a.at[i]);
        from.push(start);
        to.push(b.from[k]);
      }
      start = b.to[k];
    }
    if (start < a.to[i]) {
      at.push(a.at[i]);
      from.push(start);
      to.push(a.to[i]);
    }
  }
  return sortedSide(Int32Array.from(at), Int32Array.from(from), Int32Array.from(to));
}

/** What two sides have in common, line by line. */
export function common(a: Side, b: Side): Side {
  const at: number[] = [];
  const from: number[] = [];
  const to: number[] = [];
  for (let i = 0, j = 0; i < a.at.length && j < b.at.length;) {
    if (a.at[i] !== b.at[j]) {
      if (a.at[i] < b.at[j]) i++;
      else j++;
      continue;
    }
    const low = Math.max(a.from[i], b.from[j]);
    const high = Math.min(a.to[i], b.to[j]);
    if (low < high) {
      at.push(a.at[i]);
      from.push(low);
      to.push(high);
    }
    if (a.to[i] < b.to[j]) i++;
    else j++;
  }
  return sortedSide(Int32Array.from(at), Int32Array.from(from), Int32Array.from(to));
}

const size = 0x400_0000; // coordinates span at most 2^26, so a point fits one exact number

/** The boundary of a region given as slabs (`unitedSlabs`: maximal along x, so that their left and right sides are boundary). */
export function boundaryOf(slabs: Boxes): Boundary {
  const { x0, y0, x1, y1 } = slabs;
  const left = sortedSide(x0, y0, y1);
  const right = sortedSide(x1, y0, y1);
  const lower = sortedSide(y0, x0, x1);
  const upper = sortedSide(y1, x0, x1);
  const bottom = remaining(lower, upper);
  const top = remaining(upper, lower);

  // Each end of a segment tells of two quadrants: bit q where the region is, bit 4 + q where it is not.
  const seen = new Map<number, number>();
  const tell = (x: number, y: number, inside: number, outside: number) => {
    const key = (x + size / 2) * size + y + size / 2;
    seen.set(key, (seen.get(key) ?? 0) | (1 << inside) | (16 << outside));
  };
  const ends = (side: Side, visit: (at: number, from: number, to: number) => void) => {
    for (let i = 0; i < side.at.length; i++) visit(side.at[i], side.from[i], side.to[i]);
  };
  ends(left, (x, low, high) => (tell(x, low, 0, 1), tell(x, high, 3, 2)));
  ends(right, (x, low, high) => (tell(x, low, 1, 0), tell(x, high, 2, 3)));
  ends(bottom, (y, low, high) => (tell(low, y, 0, 3), tell(high, y, 1, 2)));
  ends(top, (y, low, high) => (tell(low, y, 3, 0), tell(high, y, 2, 1)));

  const empty = (): [number[], number[], number[], number[]] => [[], [], [], []];
  const convex = { x: empty(), y: empty() };
  const reflex = { x: empty(), y: empty() };
  for (const [key, bits] of seen) {
    const x = Math.floor(key / size) - size / 2;
    const y = (key % size) - size / 2;
    const inside = bits & 15;
    const outside = bits >>> 4;
    // Three quadrants are told of; the fourth is as the two beside it, unless all four are told of and alternate.
    const alternate = (inside === 5 && outside === 10) || (inside === 10 && outside === 5);
    for (let q = 0; q < 4; q++) {
      if (((inside >>> q) & 1) === 1 && (alternate || (inside & (inside - 1)) === 0)) {
        convex.x[q].push(x);
        convex.y[q].push(y);
      }
      if (((outside >>> q) & 1) === 1 && (alternate || (outside & (outside - 1)) === 0)) {
        reflex.x[q].push(x);
        reflex.y[q].push(y);
      }
    }
  }
  const quadrants = (c: { x: number[][]; y: number[][] }): Quadrants<Corners> => {
    const at = (q: number) => ({ x: Int32Array.from(c.x[q]), y: Int32Array.from(c.y[q]) });
    return [at(0), at(1), at(2), at(3)];
  };
  return { left, right, bottom, top, convex: quadrants(convex), reflex: quadrants(reflex) };
}
