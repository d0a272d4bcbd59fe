import type { Spread } from '../linearity/fill-sets.js';

/** Items with second moments, by index: flat lists of one length. All of them together, each without its sign, stay below 2^17. */
export interface Items {
  readonly xx: Int32Array;
  readonly xy: Int32Array;
  readonly yy: Int32Array;
}

/** Visits the subsets of `count` of the items `among` (the list is valid during the call) with their sum. */
export function visitSubsets(
  { xx, xy, yy }: Items,
  among: readonly number[],
  count: number,
  visit: (subset: readonly number[], sum: Spread) => void,
): void {
  const subset: number[] = [];
  const take = (left: number, before: number, sum: Spread): void => {
    if (left === 0) {
      visit(subset, sum);
      return;
    }
    for (let i = left - 1; i < before; i++) {
      const item = among[i];
      subset.push(item);
      take(left - 1, i, { xx: sum.xx + xx[item], xy: sum.xy + xy[item], yy: sum.yy + yy[item] });
      subset.pop();
    }
  };
  take(count, among.length, { xx: 0, xy: 0, yy: 0 });
}

/** All subsets of one size, by their sum. */
export class SubsetsBySum {
  /** Subsets looked at. */
  readonly work: number;
  readonly #subsets = new Map<number, number[][]>();

  constructor(items: Items, among: readonly number[], count: number) {
    let work = 0;
    visitSubsets(items, among, count, (subset, sum) => {
      work++;
      const key = keyOf(sum);
      const list = this.#subsets.get(key);
      if (list) list.push([...subset]);
      else this.#subsets.set(key, [[...subset]]);
    });
    this.work = work;
  }

  with(sum: Spread): readonly (readonly number[])[] {
    return this.#subsets.get(keyOf(sum)) ?? [];
  }
}

/**
 * Whether a subset of a given size has a given sum, by meeting in the middle (Horowitz and Sahni, Journal of the ACM, 1974; from
 * memory): each subset is a part of the one half and a part of the other, and parts of equal size and sum do the same service.
 */
export class SubsetFinder {
  /** Parts looked at: once to set up, and by every `find`. */
  readonly work: number;
  readonly #near: readonly ReadonlyMap<number, readonly number[]>[];
  readonly #far: readonly (readonly Part[])[];

  constructor(items: Items, among: readonly number[], count: number) {
    const middle = among.length >> 1;
    this.#near = bySize(items, among.slice(0, middle), count).map(
      (parts) => new Map(parts.map(({ items: part, sum }) => [keyOf(sum), part])),
    );
    this.#far = bySize(items, among.slice(middle), count);
    this.work = this.#far.reduce((sum, parts) => sum + parts.length, 0);
  }

  find(count: number, sum: Spread): readonly number[] | undefined {
    for (let far = 0; far <= count; far++) {
      const near = this.#near[count - far];
      for (const part of this.#far[far]) {
        const rest = { xx: sum.xx - part.sum.xx, xy: sum.xy - part.sum.xy, yy: sum.yy - part.sum.yy };
        const found = near.get(keyOf(rest));
        if (found) return [...found, ...part.items];
      }
    }
    return undefined;
  }
}

interface Part {
  readonly items: readonly number[];
  readonly sum: Spread;
}

/** One part of each size up to `most` and each sum. */
function bySize(items: Items, among: readonly number[], most: number): Part[][] {
  return Array.from({ length: most + 1 }, (_, size) => {
    const parts = new Map<number, Part>();
    visitSubsets(items, among, size, (subset, sum) => {
      const key = keyOf(sum);
      if (!parts.has(key)) parts.set(key, { items: [...subset], sum });
    });
    return [...parts.values()];
  });
}

const STRIDE = 262_144; // 2^18
const keyOf = ({ xx, xy, yy }: Spread): number => (xx * STRIDE + xy) * STRIDE + yy;
