import { describe, expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { secondOrderInl } from '../../src/linearity/exact-inl.js';
import { lowerBound, strongerBound } from '../../src/linearity/lower-bound.js';
import { dealBlocks } from '../../src/placement/dealing.js';
import type { Capacitor, Core } from '../../src/spec/floorplan.js';

const bitsOf = (weights: readonly number[]): Capacitor[] =>
  weights.map((weight, k) => ({ name: `B${k}`, role: 'bit', weight, units: weight }));
const binary = (bits: number): Capacitor[] => bitsOf(Array.from({ length: bits }, (_, k) => 2 ** k));
const core = (rows: number, columns: number, pitch_um: [number, number] = [1, 1]): Core => ({
  rows,
  columns,
  pitch_um,
});

/** All ways to pick `count` of `from`. */
function* picks(from: readonly number[], count: number, first = 0): Generator<number[]> {
  if (count === 0) yield [];
  else
    for (let i = first; i <= from.length - count; i++)
      for (const rest of picks(from, count - 1, i + 1)) yield [from[i], ...rest];
}

/** Every placement of 4 bits on a core of 15 cells whose first order is 0: the cells' bits, and whether it is point-reflected. */
function* centred(rows: number, columns: number): Generator<{ bit: number[]; reflected: boolean }> {
  const all = Array.from({ length: 15 }, (_, cell) => cell);
  const column = (cell: number): number => (cell % columns) - (columns - 1) / 2;
  const row = (cell: number): number => Math.floor(cell / columns) - (rows - 1) / 2;
  const centredAt = (cells: readonly number[]): boolean =>
    cells.reduce((sum, cell) => sum + column(cell), 0) === 0 && cells.reduce((sum, cell) => sum + row(cell), 0) === 0;
  const free = all.filter((cell) => cell !== 7);
  for (const two of [...picks(free, 2)].filter(centredAt)) {
    const left = free.filter((cell) => !two.includes(cell));
    for (const four of [...picks(left, 4)].filter(centredAt)) {
      const bit = all.map((cell) => (cell === 7 ? 0 : two.includes(cell) ? 1 : four.includes(cell) ? 2 : 3));
      yield { bit, reflected: bit.every((of, cell) => of === bit[14 - cell]) };
    }
  }
}

/** 6 bits: 4 cells of zero sum without a reflection among them for B2, their mirror image for B5, the rest in pairs at random. */
function lopsided(rows: number, columns: number, random: Random): number[] {
  const last = rows * columns - 1;
  const x = (cell: number): number => 2 * (cell % columns) - columns + 1;
  const y = (cell: number): number => 2 * Math.floor(cell / columns) - rows + 1;
  for (;;) {
    const [a, b, c] = [0, 1, 2].map(() => random.below(last + 1));
    const [dx, dy] = [x(a) + x(b) + x(c), y(a) + y(b) + y(c)];
    if (Math.abs(dx) >= columns || Math.abs(dy) >= rows) continue;
    const d = ((rows - 1 - dy) / 2) * columns + (columns - 1 - dx) / 2;
    const four = [a, b, c, d];
    if (new Set(four.flatMap((cell) => [cell, last - cell, last / 2])).size !== 9) continue;
    const net = new Array<number>(last + 1).fill(-1);
    net[last / 2] = 0;
    for (const cell of four) [net[cell], net[last - cell]] = [2, 5];
    const left = [...net.keys()].filter((cell) => 2 * cell < last && net[cell] < 0);
    const nets = [1, ...new Array<number>(4).fill(3), ...new Array<number>(8).fill(4)];
    while (nets.length < left.length) nets.push(5);
    for (let i = left.length - 1; i >= 0; i--) {
      const cell = left.splice(random.below(i + 1), 1)[0];
      net[cell] = net[last - cell] = nets[i];
    }
    return net;
  }
}

describe('lower bound with three capacitors', () => {
  it.each([core(3, 5), core(5, 3, [7.2, 5.7]), core(3, 5, [1, 1.3]), core(5, 3, [7.84, 5.7])])(
    '4 bits on %o: what the best of all 159 placements reaches, and the best point-reflected one of 105',
    (given) => {
      // The fourth capacitor is minus the sum of three, so the bound is reached.
      const capacitors = binary(4);
      const least = { all: Infinity, reflected: Infinity };
      const count = { all: 0, reflected: 0 };
      for (const { bit, reflected } of centred(given.rows, given.columns)) {
        const cells = Array.from({ length: given.rows }, (_, row) =>
          bit.slice(row * given.columns, (row + 1) * given.columns).map((of) => `B${of}`),
        );
        const { first, second } = analyseGradient({ core: given, capacitors, cells });
        expect(first.inl_lsb).toBe(0);
        for (const kind of reflected ? (['all', 'reflected'] as const) : (['all'] as const)) {
          count[kind]++;
          least[kind] = Math.min(least[kind], second.inl_lsb);
        }
      }
      expect(count).toEqual({ all: 159, reflected: 105 });
      expect(strongerBound(given, capacitors, 'zero-first-order')!.inl_lsb / least.all).toBeCloseTo(1, 12);
      expect(strongerBound(given, capacitors, 'point-reflected')!.inl_lsb / least.reflected).toBeCloseTo(1, 12);
    },
  );

  const arrays = [
    [core(5, 3), [1, 2, 4, 8]],
    [core(5, 7, [7.2, 5.7]), [1, 2, 4, 8, 16]],
    [core(7, 9), [1, 2, 4, 8, 16, 32]],
    [core(7, 9, [1.2, 1]), [1, 2, 4, 8, 16, 32]],
    [core(9, 7, [7.84, 5.7]), [1, 2, 4, 8, 16, 32]],
    [core(5, 13, [5.7, 7.2]), [1, 2, 4, 8, 16, 32]],
    [core(15, 17, [7.84, 5.7]), [1, 2, 4, 8, 16, 32, 64, 128]],
    [core(5, 5), [1, 2, 4, 6, 10]],
  ] as const;

  it('is never below the bound of two, nor above any of 10,000 point-reflected placements', () => {
    for (const [given, weights] of arrays) {
      const bits = bitsOf(weights);
      const two = lowerBound(given, bits);
      const free = strongerBound(given, bits, 'zero-first-order');
      const reflected = strongerBound(given, bits, 'point-reflected')!;
      if (two && free) expect(free.squared >= two.squared).toBe(true);
      if (two) expect(reflected.squared >= two.squared).toBe(true);
      if (free) expect(reflected.squared >= free.squared).toBe(true);
      for (let start = 0; start < 1250; start++) {
        const { deal } = dealBlocks({ ...given, nets: bits, random: new Random(3, start) });
        expect(secondOrderInl(deal, given.pitch_um).squared >= reflected.squared).toBe(true);
      }
    }
  });

  it('holds for placements that are not point-reflected where it says so', () => {
    for (const given of [core(7, 9), core(7, 9, [7.2, 5.7])]) {
      const capacitors = binary(6);
      const free = strongerBound(given, capacitors, 'zero-first-order')!;
      const reflected = strongerBound(given, capacitors, 'point-reflected')!;
      const random = new Random(5, 0);
      for (let n = 0; n < 300; n++) {
        const net = lopsided(given.rows, given.columns, random);
        const cells = Array.from({ length: given.rows }, (_, row) =>
          net.slice(row * given.columns, (row + 1) * given.columns).map((of) => `B${of}`),
        );
        const { first, second } = analyseGradient({ core: given, capacitors, cells });
        expect(first.inl_lsb).toBe(0);
        expect(second.inl_lsb).toBeGreaterThanOrEqual(free.inl_lsb);
      }
      // On 7 x 9 at 7.2 x 5.7 um the two lie 14 % apart.
      if (given.pitch_um[0] > 1) expect(reflected.inl_lsb / free.inl_lsb).toBeGreaterThan(1.13);
    }
  });

  it('is absent where a condition fails or there are too many sets', () => {
    expect(strongerBound(core(7, 9), binary(6), 'point-reflected')).toBeDefined();
    expect(strongerBound(core(8, 8), binary(6), 'point-reflected')).toBeUndefined();
    expect(strongerBound(core(7, 7), binary(6), 'point-reflected')).toBeUndefined();
    expect(strongerBound(core(3, 5), bitsOf([1, 2, 12]), 'point-reflected')).toBeUndefined();
    expect(strongerBound(core(3, 5), bitsOf([1, 4, 10]), 'point-reflected')).toBeUndefined();
    expect(strongerBound(core(15, 17), binary(8), 'zero-first-order')).toBeUndefined();
    expect(strongerBound(core(9, 9), binary(6), 'point-reflected')).toBeUndefined();
  });
});
