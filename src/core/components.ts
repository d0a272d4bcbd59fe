import type { Boxes } from './boxes.js';
import { BoxIndex } from './boxes.js';

/** Union-find over 0 .. count - 1; the representative of a set is its least member. */
export class DisjointSets {
  readonly #parent: Int32Array;

  constructor(count: number) {
    this.#parent = new Int32Array(count).map((_, i) => i);
  }

  find(i: number): number {
    const parent = this.#parent;
    while (parent[i] !== i) {
      parent[i] = parent[parent[i]];
      i = parent[i];
    }
    return i;
  }

  join(a: number, b: number): void {
    const one = this.find(a);
    const other = this.find(b);
    if (one < other) this.#parent[other] = one;
    else this.#parent[one] = other;
  }

  /** Numbers the sets 0, 1, ... in order of their least members: the number of the set of each member. */
  numbered(): { readonly count: number; readonly of: Int32Array } {
    const of = new Int32Array(this.#parent.length);
    let count = 0;
    for (let i = 0; i < of.length; i++) {
      const root = this.find(i);
      of[i] = root === i ? count++ : of[root];
    }
    return { count, of };
  }
}

/** Whether two boxes make one shape: they overlap or share an edge of positive length. A common corner does not join. */
export function boxesJoin(a: Boxes, i: number, b: Boxes, j: number): boolean {
  const dx = Math.min(a.x1[i], b.x1[j]) - Math.max(a.x0[i], b.x0[j]);
  const dy = Math.min(a.y1[i], b.y1[j]) - Math.max(a.y0[i], b.y0[j]);
  return dx >= 0 && dy >= 0 && dx + dy > 0;
}

/** Whether two boxes overlap in a positive area. */
export const boxesOverlap = (a: Boxes, i: number, b: Boxes, j: number): boolean =>
  a.x0[i] < b.x1[j] && b.x0[j] < a.x1[i] && a.y0[i] < b.y1[j] && b.y0[j] < a.y1[i];

/** Visits each pair i < j of boxes that join (`boxesJoin`). */
export function eachJoint(boxes: Boxes, index: BoxIndex, visit: (i: number, j: number) => void): void {
  for (let i = 0; i < boxes.x0.length; i++)
    for (const j of index.search(boxes.x0[i], boxes.y0[i], boxes.x1[i], boxes.y1[i]))
      if (j > i && boxesJoin(boxes, i, boxes, j)) visit(i, j);
}

/** The connected shapes that boxes of one layer make, numbered in order of their first box. */
export function componentsOf(
  boxes: Boxes,
  index: BoxIndex = new BoxIndex(boxes),
): { readonly count: number; readonly of: Int32Array } {
  const sets = new DisjointSets(boxes.x0.length);
  eachJoint(boxes, index, (i, j) => sets.join(i, j));
  return sets.numbered();
}
