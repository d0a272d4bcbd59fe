import { describe, expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { secondOrderInl } from '../../src/linearity/exact-inl.js';
import { ExactSearch, isSearchable } from '../../src/placement/exact-search.js';
import { dealBlocks } from '../../src/placement/dealing.js';
import type { Capacitor, Core } from '../../src/spec/floorplan.js';

const binary = (count: number): Capacitor[] =>
  Array.from({ length: count }, (_, k) => ({ name: `B${k}`, role: 'bit', weight: 2 ** k, units: 2 ** k }));
const core = (rows: number, columns: number, pitch_um: [number, number] = [1, 1]): Core => ({
  rows,
  columns,
  pitch_um,
});

function solve(given: Core, bits: readonly Capacitor[], incumbent?: bigint, work = 10_000): ExactSearch {
  const search = new ExactSearch({ core: given, bits, ...(incumbent !== undefined && { incumbent }) });
  while (search.step(work)) expect(search.status).toBe('running');
  return search;
}

/** The result as the analysis sees it: cells counted afresh. */
function analysed(search: ExactSearch, given: Core, bits: readonly Capacitor[]) {
  const { netOfCell } = search.best()!;
  const cells = Array.from({ length: given.rows }, (_, row) =>
    Array.from({ length: given.columns }, (_, column) => bits[netOfCell[row * given.columns + column]]?.name ?? '-'),
  );
  for (const { name, units } of bits) expect(cells.flat().filter((cell) => cell === name)).toHaveLength(units);
  expect([...cells].reverse().map((line) => [...line].reverse())).toEqual(cells);
  const { first, second } = analyseGradient({ core: given, capacitors: bits, cells });
  expect(first.inl_lsb).toBe(0);
  return second;
}

/** Bit b of `mask` says that pair b is in it. */
function masks(pairs: number, count: number): number[] {
  const all: number[] = [];
  const take = (left: number, before: number, mask: number): void => {
    if (left === 0) all.push(mask);
    for (let i = left - 1; left > 0 && i < before; i++) take(left - 1, i, mask | (1 << i));
  };
  take(count, pairs, 0);
  return all;
}

/** Least second order (LSB per ppm/um^2) over all point-reflected placements, by going through every one and all its codes. */
function leastByTryingAll({ rows, columns, pitch_um: [px, py] }: Core, bits: number): number {
  const pairs = (rows * columns - 1) / 2;
  const total = 2 ** bits - 1;
  const xx: number[] = [];
  const xy: number[] = [];
  const yy: number[] = [];
  for (let cell = 0; cell < pairs; cell++) {
    const x = ((cell % columns) - (columns - 1) / 2) * px;
    const y = (Math.floor(cell / columns) - (rows - 1) / 2) * py;
    xx.push(2 * x * x);
    xy.push(2 * x * y);
    yy.push(2 * y * y);
  }
  const sum = (values: readonly number[], mask: number): number =>
    values.reduce((all, value, pair) => all + ((mask >> pair) & 1 ? value : 0), 0);
  const ofSize = new Map([1, 2, 4, 8].map((size) => [size, size <= pairs ? masks(pairs, size) : []]));
  const moments = new Map<number, readonly [number, number, number]>();
  const momentsOf = (mask: number): readonly [number, number, number] => {
    let known = moments.get(mask);
    if (!known) moments.set(mask, (known = [sum(xx, mask), sum(xy, mask), sum(yy, mask)]));
    return known;
  };
  let least = Infinity;
  for (const fill of masks(pairs, (rows * columns - total) / 2)) {
    const whole = momentsOf(((1 << pairs) - 1) ^ fill);
    const residual = (weight: number, [a, b, c]: readonly [number, number, number]): number[] => [
      a - (weight * whole[0]) / total,
      b - (weight * whole[1]) / total,
      c - (weight * whole[2]) / total,
    ];
    // Codes with the largest bit are complements of those without.
    const place = (k: number, taken: number, codes: readonly (readonly number[])[], norm: number): void => {
      if (k === bits - 1) {
        if (norm < least) least = norm;
        return;
      }
      for (const mask of ofSize.get(2 ** (k - 1))!) {
        if (mask & taken) continue;
        const [a, b, c] = residual(2 ** k, momentsOf(mask));
        let larger = norm;
        const more = k === bits - 2 ? [] : [...codes];
        for (const code of codes) {
          const [p, q, r] = [code[0] + a, code[1] + b, code[2] + c];
          larger = Math.max(larger, Math.abs(p + r), Math.sqrt((p - r) * (p - r) + 4 * q * q));
          if (k < bits - 2) more.push([p, q, r]);
        }
        place(k + 1, taken | mask, more, larger);
      }
    };
    const lone = residual(1, [0, 0, 0]);
    const norm = Math.max(Math.abs(lone[0] + lone[2]), Math.sqrt((lone[0] - lone[2]) ** 2 + 4 * lone[1] ** 2));
    place(1, fill, [[0, 0, 0], lone], norm);
  }
  return 1e-6 * least;
}

describe('exact search', () => {
  it.each([
    [2, core(1, 3)],
    [2, core(3, 3, [7.2, 5.7])],
    [3, core(3, 3)],
    [3, core(5, 5, [1, 1.3])],
    [3, core(1, 7)],
    [4, core(3, 5)],
    [4, core(5, 3)],
    [4, core(5, 3, [7.2, 5.7])],
    [4, core(3, 5, [7.84, 5.7])],
    [4, core(3, 7, [1, 1.3])],
    [4, core(5, 5)],
    [5, core(31, 1)],
    [5, core(3, 11, [2, 1])],
  ])('%d bits on %o: what plain enumeration finds', (count, given) => {
    const bits = binary(count);
    const search = solve(given, bits);
    expect(search.status).toBe('proved');
    const { inl_lsb_per_ppm_per_um2: found } = analysed(search, given, bits);
    expect(found / leastByTryingAll(given, count)).toBeCloseTo(1, 12);
  });

  // 0.005769 and, off the square pitch, 1.138 and 1.133 x the bound of two capacitors.
  it.each([
    [core(7, 9), Math.sqrt(208) / 2500],
    [core(7, 9, [7.2, 5.7]), 0.00509061576007],
    [core(7, 9, [7.84, 5.7]), 0.00485456739286],
    [core(9, 7, [7.2, 5.7]), 0.00685031476004],
  ])('6 bits on %o: %d LSB per 1 %%', (given, wanted) => {
    const bits = binary(6);
    const search = solve(given, bits);
    expect(search.status).toBe('proved');
    expect(search.progress).toBe(1);
    const second = analysed(search, given, bits);
    expect(second.inl_lsb / wanted).toBeCloseTo(1, 10);
    expect(second.lowerBound_inl_lsb).toBeLessThanOrEqual(second.inl_lsb);
  });

  it('no placement of 10,000 dealt at random has less', () => {
    for (const [count, given] of [
      [5, core(5, 7, [7.2, 5.7])],
      [6, core(7, 9)],
      [6, core(9, 7, [7.84, 5.7])],
      [6, core(5, 13, [5.7, 7.2])],
    ] as const) {
      const bits = binary(count);
      const { squared } = solve(given, bits).best()!;
      for (let start = 0; start < 2500; start++) {
        const { deal } = dealBlocks({ ...given, nets: bits, random: new Random(7, start) });
        expect(secondOrderInl(deal, given.pitch_um).squared >= squared).toBe(true);
      }
    }
  });

  it('looks only below the incumbent', () => {
    for (const [count, given] of [
      [3, core(3, 3)],
      [4, core(5, 3, [7.2, 5.7])],
      [5, core(5, 7)],
      [6, core(7, 9)],
    ] as const) {
      const bits = binary(count);
      const free = solve(given, bits).best()!;
      const same = solve(given, bits, free.squared);
      expect(same.status).toBe('proved');
      expect(same.best()).toBeUndefined();
      for (const above of [free.squared + 1n, 2n * free.squared, 1000n * free.squared])
        expect(solve(given, bits, above).best()?.squared).toBe(free.squared);
    }
  });

  it('is the same however the work is cut, and in whatever order the bits are given', () => {
    const given = core(5, 7, [7.2, 5.7]);
    const bits = binary(5);
    const whole = solve(given, bits, undefined, 1e9);
    for (const work of [1, 700]) {
      const cut = solve(given, bits, undefined, work);
      expect(cut.best()).toEqual(whole.best());
      expect(cut.work).toBe(whole.work);
    }
    const turned = [...bits].reverse();
    const reversed = solve(given, turned);
    expect(reversed.best()!.squared).toBe(whole.best()!.squared);
    expect(analysed(reversed, given, turned).inl_lsb).toBe(analysed(whole, given, bits).inl_lsb);
  });

  it('is for straight binary bits on odd cores with little fill', () => {
    expect(isSearchable(core(7, 9), binary(6))).toBe(true);
    for (const [given, bits] of [
      [core(1, 1), binary(1)],
      [core(9, 15), binary(7)],
      [core(8, 8), binary(6)],
      [core(3, 3), binary(4)],
      [core(9, 9), binary(6)],
      [core(3, 5), binary(4).map((bit) => ({ ...bit, weight: 2 * bit.weight }))],
      [core(3, 5), [1, 2, 3, 9].map((units, k): Capacitor => ({ name: `B${k}`, role: 'bit', weight: units, units }))],
    ] as const) {
      expect(isSearchable(given, bits)).toBe(false);
      expect(() => new ExactSearch({ core: given, bits })).toThrow(RangeError);
    }
  });
});
