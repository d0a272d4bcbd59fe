import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { candidateCores, oddDeal } from '../../src/array/core-grid.js';
import { mirroredTriples } from '../../src/array/mirrored-triples.js';
import { Random } from '../../src/core/random.js';

const binary = (bits: number): number[] => Array.from({ length: bits }, (_, i) => 1 << i);
const aspect = (rows: number, columns: number, [px, py]: readonly [number, number]): number =>
  Math.max((columns * px) / (rows * py), (rows * py) / (columns * px));

/** All odd x odd cores, one by one, and of those within the aspect the fills that leave no two single units competing for the centre. */
function leastFillByEnumeration(units: number[], pitch: readonly [number, number]): number {
  const total = units.reduce((a, b) => a + b, 0);
  let least = Infinity;
  for (let rows = 1; rows <= 2 * total; rows += 2) {
    for (let columns = 1; rows * columns <= 4 * total + 9; columns += 2) {
      const fill = rows * columns - total;
      if (fill < 0 || aspect(rows, columns, pitch) > 1.7) continue;
      if ([...units, fill].filter((n) => n === 1).length <= 1) least = Math.min(least, fill);
    }
  }
  return least;
}

describe('candidateCores', () => {
  it('fills even bit counts without a dummy: 2^N - 1 = (2^(N/2) - 1)(2^(N/2) + 1)', () => {
    for (const bits of [4, 6, 8, 10, 12, 14]) {
      const side = 2 ** (bits / 2);
      expect(candidateCores(binary(bits), 0, [1, 1])).toEqual([
        { rows: side + 1, columns: side - 1 },
        { rows: side - 1, columns: side + 1 },
      ]);
    }
  });

  it('puts two bits in a line', () => {
    expect(candidateCores([1, 2], 0, [7, 5])).toEqual([
      { rows: 3, columns: 1 },
      { rows: 1, columns: 3 },
    ]);
  });

  it('keeps an orientation only within the physical aspect', () => {
    expect(candidateCores(binary(6), 0, [7.2, 5])).toEqual([{ rows: 9, columns: 7 }]);
  });

  it('agrees with plain enumeration', () => {
    const pitches = [
      [1, 1],
      [7.2, 5],
      [3, 4],
    ] as const;
    for (const bits of [4, 5, 6, 7, 8, 9, 10, 11]) {
      for (const pitch of pitches) {
        const units = binary(bits);
        const least = leastFillByEnumeration(units, pitch);
        const cores = candidateCores(units, 0, pitch);
        expect(cores.length).toBeGreaterThan(0);
        for (const { rows, columns } of cores) {
          expect([rows % 2, columns % 2]).toEqual([1, 1]);
          expect(rows * columns - ((1 << bits) - 1)).toBe(least);
          expect(aspect(rows, columns, pitch)).toBeLessThanOrEqual(1.7);
        }
      }
    }
  });

  it('agrees with plain enumeration on random weights that have room for their triples', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 2, max: 60 }), { minLength: 3, maxLength: 9 }), (weights) => {
        const units = [1, ...weights];
        const total = units.reduce((a, b) => a + b, 0);
        fc.pre(total > 40);
        for (const { rows, columns } of candidateCores(units, 0, [1, 1])) {
          expect(rows * columns - total).toBe(leastFillByEnumeration(units, [1, 1]));
        }
      }),
      { numRuns: 60 },
    );
  });

  it('gives a termination inside the core room as if it were fill', () => {
    // 63 units and the termination: 7 x 9 is one cell short, 7 x 11 is the next within the aspect.
    expect(candidateCores(binary(6), 1, [1, 1])).toEqual([
      { rows: 11, columns: 7 },
      { rows: 7, columns: 11 },
    ]);
  });

  it('takes an even side along the shorter pitch where two single units compete', () => {
    for (const { rows, columns } of candidateCores([1, 1, 2, 4, 8], 0, [3, 4])) {
      expect([rows % 2, columns % 2]).toEqual([1, 0]);
    }
    for (const { rows, columns } of candidateCores([1, 1, 2, 4, 8], 0, [4, 3])) {
      expect([rows % 2, columns % 2]).toEqual([0, 1]);
    }
  });
});

describe('oddDeal', () => {
  it('gives the centre to the single unit, else to the least odd count', () => {
    expect(oddDeal([1, 2, 4, 8])).toEqual({ atCentre: 0, triples: 0 });
    expect(oddDeal([2, 9, 5, 4, 3])).toEqual({ atCentre: 4, triples: 1 });
    expect(oddDeal([1, 1, 3])).toBeUndefined();
  });
});

/** Whether `count` disjoint triples exist, by trying all sets of them. */
function triplesExist(rows: number, columns: number, count: number): boolean {
  const cells = rows * columns;
  const all: number[][] = [];
  for (let a = 0; a < cells; a++) {
    for (let b = a + 1; b < cells; b++) {
      for (let c = b + 1; c < cells; c++) {
        const three = [a, b, c];
        const x = three.reduce((sum, cell) => sum + (cell % columns), 0);
        const y = three.reduce((sum, cell) => sum + Math.floor(cell / columns), 0);
        const both = new Set([...three, ...three.map((cell) => cells - 1 - cell)]);
        if (2 * x === 3 * (columns - 1) && 2 * y === 3 * (rows - 1) && both.size === 6) all.push([...both]);
      }
    }
  }
  const some = (from: number, left: number, used: Set<number>): boolean => {
    if (left === 0) return true;
    for (let t = from; t < all.length; t++) {
      if (all[t].some((cell) => used.has(cell))) continue;
      if (some(t + 1, left - 1, new Set([...used, ...all[t]]))) return true;
    }
    return false;
  };
  return some(0, count, new Set());
}

describe('mirroredTriples', () => {
  it('finds disjoint triples of zero sum exactly where there are any', () => {
    for (const [rows, columns] of [
      [1, 1],
      [1, 5],
      [1, 7],
      [1, 9],
      [3, 3],
      [3, 5],
      [5, 3],
      [3, 7],
      [5, 5],
    ]) {
      // prettier-ignore
      for (let count = 1; count <= 4; count++) {
        const triples = mirroredTriples(rows, columns, count, new Random(count));
        expect(triples !== undefined, `${count} in ${rows} x ${columns}`).toBe(triplesExist(rows, columns, count));
        if (!triples) continue;
        const last = rows * columns - 1;
        const used = [...triples].flatMap((cell) => [cell, last - cell]);
        expect(new Set([...used, last / 2]).size).toBe(6 * count + 1);
        for (let t = 0; t < count; t++) {
          const three = [...triples.subarray(3 * t, 3 * t + 3)];
          expect(three.reduce((sum, cell) => sum + (cell % columns), 0)).toBe((3 * (columns - 1)) / 2);
          expect(three.reduce((sum, cell) => sum + Math.floor(cell / columns), 0)).toBe((3 * (rows - 1)) / 2);
        }
      }
    }
    // 1 + 2 - 3 = 0 needs three cells on each side.
    expect(mirroredTriples(1, 7, 1, new Random(0))).toBeDefined();
    expect(mirroredTriples(1, 5, 1, new Random(0))).toBeUndefined();
  });
});
