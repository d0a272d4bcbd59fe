import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { candidateCores } from '../../src/array/core-grid.js';
import { Random } from '../../src/core/random.js';
import type { Arrangement, DealtNet, Dealing } from '../../src/placement/dealing.js';
import { dealBlocks, netsOfCells } from '../../src/placement/dealing.js';
import {
  binaryNets,
  columnNets,
  firstMoments,
  firstOrder,
  leastFirstOrder,
  netsOfBlocks,
  weightedNets,
} from './brute.js';

const COLUMNS: Arrangement = { columns: { momentPrice: 1 } };

function deal(
  rows: number,
  columns: number,
  nets: DealtNet[],
  seed = 1,
  arrangement: Arrangement = 'scattered',
): Dealing {
  return dealBlocks({ rows, columns, nets, random: new Random(seed), arrangement });
}

/** Every cell in one block, every net with as many cells as it has units; then the first moments. */
function audit(dealing: Dealing, nets: readonly DealtNet[]): [number, number][] {
  const { rows, columns, weight, cells } = dealing.deal;
  expect([...cells].sort((a, b) => a - b)).toEqual(Array.from({ length: rows * columns }, (_, cell) => cell));
  const netOfCell = netsOfCells(dealing, dealing.deal.netOfBlock);
  nets.forEach(({ units }, net) => expect(netOfCell.filter((n) => n === net).length).toBe(units));
  return firstMoments({ rows, columns, weight: [...weight], netOfCell });
}

/** Exchanges blocks of one group at random. */
function disturb(dealing: Dealing, seed: number): void {
  const random = new Random(seed);
  const { netOfBlock } = dealing.deal;
  for (let n = 0; n < 20 * netOfBlock.length; n++) {
    const a = random.below(netOfBlock.length);
    const b = random.below(netOfBlock.length);
    if (dealing.group[a] === dealing.group[b]) [netOfBlock[a], netOfBlock[b]] = [netOfBlock[b], netOfBlock[a]];
  }
}

function expectZero(dealing: Dealing, nets: readonly DealtNet[]): void {
  expect(dealing.exactZero).toBe(true);
  for (const [x, y] of audit(dealing, nets)) expect([x, y]).toEqual([0, 0]);
  disturb(dealing, 7);
  for (const [x, y] of audit(dealing, nets)) expect([x, y]).toEqual([0, 0]);
}

describe('dealBlocks', () => {
  it('has first order exactly 0 for 2 to 14 bits, also after any exchanges', () => {
    for (let bits = 2; bits <= 14; bits++) {
      const nets = binaryNets(bits);
      for (const { rows, columns } of candidateCores(
        nets.map(({ units }) => units),
        0,
        [1, 1],
      )) {
        expectZero(deal(rows, columns, nets), nets);
        if (bits <= 10) expectZero(deal(rows, columns, nets, 2, COLUMNS), nets);
      }
    }
  });

  it('also with the termination inside the core', () => {
    for (let bits = 2; bits <= 10; bits++) {
      const nets = [...binaryNets(bits), { name: 'TERM', weight: 0, units: 1 }];
      for (const { rows, columns } of candidateCores(
        binaryNets(bits).map(({ units }) => units),
        1,
        [1, 1],
      )) {
        expectZero(deal(rows, columns, nets), nets);
      }
    }
  });

  it('has an exact zero for [1, 2, 3, 5, 9, 16, 29] on 5 x 13', () => {
    const nets = weightedNets([1, 2, 3, 5, 9, 16, 29]);
    for (let seed = 0; seed < 10; seed++) {
      expectZero(deal(5, 13, nets, seed), nets);
      expectZero(deal(5, 13, nets, seed, COLUMNS), nets);
    }
  });

  it('says exactly whether it is zero, for random weights on the cores chosen for them', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: 1, max: 40 }), { minLength: 2, maxLength: 12 }),
        fc.boolean(),
        fc.nat({ max: 1000 }),
        (weights, inColumns, seed) => {
          const nets = weightedNets(weights);
          const singles = weights.filter((w) => w === 1).length;
          for (const { rows, columns } of candidateCores(weights, 0, [1, 1])) {
            const dealing = deal(rows, columns, nets, seed, inColumns ? COLUMNS : 'scattered');
            if (singles <= 1) expectZero(dealing, nets);
            else {
              const zero = audit(dealing, nets).every(([x, y]) => x === 0 && y === 0);
              expect(zero).toBe(dealing.exactZero);
            }
          }
        },
      ),
      { numRuns: 150 },
    );
  });

  it('deals a core with an even side and enough fill about the centre of an odd x odd part', () => {
    for (const [rows, columns] of [
      [8, 9],
      [7, 10],
      [8, 10],
      [9, 8],
    ]) {
      // prettier-ignore
      const nets = binaryNets(6);
      expectZero(deal(rows, columns, nets), nets);
    }
  });

  it('says why there is no zero', () => {
    const because = (dealing: Dealing): string => (dealing.exactZero ? 'zero' : dealing.because);
    expect(because(deal(8, 8, binaryNets(6)))).toContain('B0');
    expect(because(deal(8, 8, binaryNets(6)))).toContain('8 x 8');
    expect(because(deal(3, 3, weightedNets([1, 1, 2])))).toContain('B0 and B1 have one unit each');
    expect(because(deal(3, 3, weightedNets([1, 3, 4])))).toContain('more fill');
    expect(because(deal(1, 5, weightedNets([1, 3])))).toContain('B0 and the fill');
  });

  it('keeps to half a pitch where one odd capacitor has no centre', () => {
    // 8 x 8, 6 bits and the termination: B0 at (1/2, 1/2) and nothing else off the centre is the least there is.
    const nets = [...binaryNets(6), { name: 'TERM', weight: 0, units: 1 }];
    const { deal: dealt } = deal(8, 8, nets);
    const placed = { rows: 8, columns: 8, weight: [...dealt.weight], netOfCell: netsOfBlocks(dealt) };
    expect(firstOrder(placed, [1, 1])).toBeCloseTo(1e-6 * Math.SQRT1_2 * (62 / 63), 15);
  });

  it('gives different deals for different numbers, and the same for the same', () => {
    const nets = binaryNets(6);
    expect([...deal(7, 9, nets, 1).deal.netOfBlock]).toEqual([...deal(7, 9, nets, 1).deal.netOfBlock]);
    expect(netsOfBlocks(deal(7, 9, nets, 1).deal)).not.toEqual(netsOfBlocks(deal(7, 9, nets, 2).deal));
  });

  it('plans columns with fewer nets than chance, which exchanges keep', () => {
    const nets = binaryNets(8);
    const count = (dealing: Dealing): number => {
      const { rows, columns, weight } = dealing.deal;
      return columnNets({ rows, columns, weight: [...weight], netOfCell: netsOfBlocks(dealing.deal) });
    };
    const planned = deal(17, 15, nets, 1, COLUMNS);
    const before = count(planned);
    // The published chessboard rule needs 45 on its 16 x 16 core.
    expect(before).toBeLessThan(40);
    expect(count(deal(17, 15, nets, 1))).toBeGreaterThan(60);
    disturb(planned, 3);
    expect(count(planned)).toBe(before);
  });

  it('puts the termination at the edge', () => {
    const nets = [...binaryNets(4), { name: 'TERM', weight: 0, units: 1 }];
    const dealing = deal(5, 5, nets);
    const cell = netsOfCells(dealing, dealing.deal.netOfBlock).indexOf(4);
    const fill = netsOfBlocks(dealing.deal).flatMap((net, at) => (net === 5 ? [at] : []));
    const edge = (at: number): number => Math.min(at % 5, 4 - (at % 5), Math.floor(at / 5), 4 - Math.floor(at / 5));
    expect(fill).toContain(cell);
    expect(edge(cell)).toBe(Math.min(...fill.map(edge)));
  });

  it('refuses more units than cells', () => {
    expect(() => deal(3, 3, binaryNets(4))).toThrow(RangeError);
  });

  it('tiny cores start from nothing worse than twice the best there is', () => {
    for (const [rows, columns, weights] of [
      [2, 2, [1, 1, 2]],
      [3, 3, [1, 1, 2]],
      [2, 3, [1, 2, 3]],
    ] as const) {
      // prettier-ignore
      const nets = weightedNets(weights);
      const { deal: dealt } = deal(rows, columns, nets);
      const placed = { rows, columns, weight: [...dealt.weight], netOfCell: netsOfBlocks(dealt) };
      expect(firstOrder(placed, [1, 1])).toBeLessThanOrEqual(2 * leastFirstOrder(rows, columns, nets, [1, 1]));
    }
  });
});
