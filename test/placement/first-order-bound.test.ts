import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { firstOrderBound } from '../../src/placement/first-order-bound.js';
import { binaryNets, leastFirstOrder, weightedNets } from './brute.js';

const least = (rows: number, columns: number, weights: readonly number[], pitch: readonly [number, number]): number =>
  leastFirstOrder(rows, columns, weightedNets(weights), pitch);

describe('firstOrderBound', () => {
  it('is never above the least of all placements', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 3 }),
        fc.integer({ min: 1, max: 4 }),
        fc.array(fc.integer({ min: 1, max: 5 }), { minLength: 2, maxLength: 4 }),
        fc.constantFrom<readonly [number, number]>([1, 1], [3, 2], [1, 4]),
        (rows, columns, weights, pitch) => {
          const total = weights.reduce((a, b) => a + b, 0);
          fc.pre(total <= rows * columns && rows * columns <= 9);
          const bound = firstOrderBound({ rows, columns }, weightedNets(weights), pitch);
          expect(bound).toBeLessThanOrEqual(least(rows, columns, weights, pitch) * (1 + 1e-12));
        },
      ),
      { numRuns: 300 },
    );
  });

  it('is met where one odd capacitor stands on an even core, or two single units side by side', () => {
    // B0 and the termination or fill opposite each other at the centre of 8 x 8 (by hand: B0 at (1/2, 1/2), S the same).
    const nets = [...binaryNets(6), { name: 'TERM', weight: 0, units: 1 }];
    expect(firstOrderBound({ rows: 8, columns: 8 }, nets, [1, 1])).toBeCloseTo(1e-6 * Math.SQRT1_2 * (62 / 63), 15);
    expect(firstOrderBound({ rows: 1, columns: 2 }, weightedNets([1, 1]), [3, 2])).toBeGreaterThan(0);
    expect(firstOrderBound({ rows: 3, columns: 2 }, weightedNets([1, 1, 2, 2]), [2, 3])).toBeCloseTo(1e-6, 15);
    expect(least(3, 2, [1, 1, 2, 2], [2, 3])).toBeCloseTo(1e-6, 15);
  });

  it('is 0 where 0 can be reached', () => {
    for (const bits of [2, 4, 6, 8]) {
      const side = 2 ** (bits / 2);
      expect(firstOrderBound({ rows: side - 1, columns: side + 1 }, binaryNets(bits), [1, 1])).toBe(0);
    }
    // About the centre of an odd x odd part of it.
    expect(firstOrderBound({ rows: 8, columns: 9 }, binaryNets(6), [1, 1])).toBe(0);
  });
});
