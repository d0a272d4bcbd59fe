import type { Boxes } from './boxes.js';
import { BoxList } from './boxes.js';
import { orderBy } from './order.js';

/**
 * Horizontal edges in flat arrays: edge `i` runs from x0[i] to x1[i] (x0 < x1) at height y[i] and changes the winding number of all
 * that lies above it by change[i].
 */
export interface WindingEdges {
  readonly x0: Int32Array;
  readonly x1: Int32Array;
  readonly y: Int32Array;
  readonly change: Int8Array;
}

/** Whole numbers 0 .. size - 1 as a tree of bit words: neighbours are found in log32(size) steps. */
class BitTree {
  readonly #levels: Int32Array[] = [];

  constructor(size: number) {
    let words = size;
    do {
      words = Math.max(1, Math.ceil(words / 32));
      this.#levels.push(new Int32Array(words));
    } while (words > 1);
  }

  has(i: number): boolean {
    return ((this.#levels[0][i >>> 5] >>> (i & 31)) & 1) === 1;
  }

  add(i: number): void {
    for (const level of this.#levels) {
      level[i >>> 5] |= 1 << (i & 31);
      i >>>= 5;
    }
  }

  delete(i: number): void {
    for (const level of this.#levels) {
      level[i >>> 5] &= ~(1 << (i & 31));
      if (level[i >>> 5] !== 0) return;
      i >>>= 5;
    }
  }

  /** The smallest member >= i, or -1. */
  next(i: number): number {
    const levels = this.#levels;
    for (let l = 0; l < levels.length; l++) {
      const word = i >>> 5;
      if (word >= levels[l].length) return -1;
      const bits = levels[l][word] & (-1 << (i & 31));
      if (bits !== 0) {
        i = (word << 5) + 31 - Math.clz32(bits & -bits);
        while (l-- > 0) {
          const below = levels[l][i];
          i = (i << 5) + 31 - Math.clz32(below & -below);
        }
        return i;
      }
      i = word + 1;
    }
    return -1;
  }

  /** The largest member <= i, or -1. */
  previous(i: number): number {
    const levels = this.#levels;
    for (let l = 0; l < levels.length; l++) {
      if (i < 0) return -1;
      const word = i >>> 5;
      const bits = levels[l][word] & (-1 >>> (31 - (i & 31)));
      if (bits !== 0) {
        i = (word << 5) + 31 - Math.clz32(bits);
        while (l-- > 0) i = (i << 5) + 31 - Math.clz32(levels[l][i]);
        return i;
      }
      i = word - 1;
    }
    return -1;
  }
}

function distinctSorted(a: Int32Array, b: Int32Array): Int32Array {
  const all = new Int32Array(a.length + b.length);
  all.set(a);
  all.set(b, a.length);
  all.sort();
  let count = 0;
  for (let i = 0; i < all.length; i++) if (i === 0 || all[i] !== all[i - 1]) all[count++] = all[i];
  return all.subarray(0, count);
}

function position(sorted: Int32Array, value: number): number {
  let low = 0;
  let high = sorted.length - 1;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (sorted[middle] < value) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * The region of non-zero winding number as disjoint slabs: in each of them every horizontal line covers a run of the region from end to
 * end, so left and right sides are boundary all along, and two slabs meet only in parts of their top and bottom sides.
 *
 * A sweep upwards. Between two heights the region is a list of runs; only runs that an edge at this height touches are looked at again,
 * so a comb of a million points costs a million steps, not a million times its teeth.
 */
export function slabsOf(edges: WindingEdges): Boxes {
  const slabs = new BoxList();
  const xs = distinctSorted(edges.x0, edges.x1);
  const order = orderBy(edges.y, edges.x0); // from the lowest up, in each height from the left
  // Breakpoints of the winding number along x; winding[i] holds from breakpoint i to the next one.
  const breaks = new BitTree(xs.length);
  const winding = new Int32Array(xs.length);
  const since = new Int32Array(xs.length); // the height at which the run that starts here began
  const left = new Int32Array(order.length);
  const right = new Int32Array(order.length);
  for (let i = 0; i < order.length; i++) {
    left[i] = position(xs, edges.x0[order[i]]);
    right[i] = position(xs, edges.x1[order[i]]);
  }

  const split = (i: number) => {
    if (breaks.has(i)) return;
    const before = breaks.previous(i);
    winding[i] = before < 0 ? 0 : winding[before];
    breaks.add(i);
  };
  const drop = (i: number) => {
    if (!breaks.has(i)) return;
    const before = breaks.previous(i - 1);
    if (winding[i] === (before < 0 ? 0 : winding[before])) breaks.delete(i);
  };
  /** Lists as pairs the runs that touch one of the stretches, from left to right, each once. */
  const runsAt = (stretches: readonly number[], runs: number[]) => {
    runs.length = 0;
    let last = -1;
    for (let s = 0; s < stretches.length; s += 2) {
      let i = breaks.previous(stretches[s]);
      if (i === stretches[s]) {
        const before = breaks.previous(i - 1);
        if (before >= 0 && winding[before] !== 0) i = before;
      }
      if (i < 0) i = breaks.next(stretches[s]);
      else
        while (winding[i] !== 0) {
          const before = breaks.previous(i - 1);
          if (before < 0 || winding[before] === 0) break;
          i = before;
        }
      while (i >= 0 && i <= stretches[s + 1]) {
        if (winding[i] === 0) {
          i = breaks.next(i + 1);
          continue;
        }
        let end = breaks.next(i + 1);
        while (winding[end] !== 0) end = breaks.next(end + 1);
        if (i >= last) {
          runs.push(i, end);
          last = end;
        }
        i = end;
      }
    }
  };
  /** Visits the runs of `a` that are not in `b`. */
  const without = (a: readonly number[], b: readonly number[], visit: (from: number, to: number) => void) => {
    for (let i = 0, j = 0; i < a.length; i += 2) {
      while (j < b.length && b[j] < a[i]) j += 2;
      if (!(j < b.length && b[j] === a[i] && b[j + 1] === a[i + 1])) visit(a[i], a[i + 1]);
    }
  };

  const stretches: number[] = [];
  const before: number[] = [];
  const after: number[] = [];
  for (let from = 0, to = 0; from < order.length; from = to) {
    const y = edges.y[order[from]];
    stretches.length = 0;
    for (to = from; to < order.length && edges.y[order[to]] === y; to++) {
      const top = stretches.length - 1;
      if (top >= 0 && left[to] <= stretches[top]) stretches[top] = Math.max(stretches[top], right[to]);
      else stretches.push(left[to], right[to]);
    }
    runsAt(stretches, before);
    for (let e = from; e < to; e++) {
      split(left[e]);
      split(right[e]);
      for (let i = left[e]; i < right[e]; i = breaks.next(i + 1)) winding[i] += edges.change[order[e]];
    }
    for (let e = from; e < to; e++) {
      drop(left[e]);
      drop(right[e]);
    }
    runsAt(stretches, after);
    without(before, after, (a, b) => slabs.push(xs[a], since[a], xs[b], y));
    without(after, before, (a) => (since[a] = y));
  }
  return slabs.finish();
}

/** The horizontal edges of boxes that each change the winding number by `by` within. */
function edgesOf(boxes: Boxes, by: 1 | -1, edges: WindingEdges, at: number): void {
  const count = boxes.x0.length;
  for (let side = 0; side < 2; side++) {
    edges.x0.set(boxes.x0, at + side * count);
    edges.x1.set(boxes.x1, at + side * count);
    edges.y.set(side === 0 ? boxes.y0 : boxes.y1, at + side * count);
    edges.change.fill(side === 0 ? by : -by, at + side * count, at + (side + 1) * count);
  }
}

const noEdges = (boxes: number): WindingEdges => ({
  x0: new Int32Array(2 * boxes),
  x1: new Int32Array(2 * boxes),
  y: new Int32Array(2 * boxes),
  change: new Int8Array(2 * boxes),
});

/** The union of boxes as slabs (see `slabsOf`), ordered by their tops. */
export function unitedSlabs(boxes: Boxes): Boxes {
  const edges = noEdges(boxes.x0.length);
  edgesOf(boxes, 1, edges, 0);
  return slabsOf(edges);
}

/** What lies in one of two regions and not in the other, as slabs. Either is given as disjoint boxes: its winding number is 0 or 1. */
export function differingSlabs(a: Boxes, b: Boxes): Boxes {
  const edges = noEdges(a.x0.length + b.x0.length);
  edgesOf(a, 1, edges, 0);
  edgesOf(b, -1, edges, 2 * a.x0.length);
  return slabsOf(edges);
}
