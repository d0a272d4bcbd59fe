import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { lowerBound } from '../../src/linearity/lower-bound.js';
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

/** The least second order over every single placement whose first order is 0, weights [1, 2, rest], by trying them all. */
function leastByTryingAll({ rows, columns, pitch_um }: Core, rest: number): number {
  const all = Array.from({ length: rows * columns }, (_, cell) => cell);
  // Half-pitches, so that a zero is a zero.
  const x = all.map((cell) => 2 * (cell % columns) - columns + 1);
  const y = all.map((cell) => rows - 1 - 2 * Math.floor(cell / columns));
  const of = (cells: readonly number[], value: (cell: number) => number): number =>
    cells.reduce((sum, cell) => sum + value(cell), 0);
  const total = 3 + rest;
  let least = Infinity;
  for (const fill of picks(all, all.length - total)) {
    const bits = all.filter((cell) => !fill.includes(cell));
    const sum = [x, y].map((at) => of(bits, (cell) => at[cell]));
    const zero = (cells: readonly number[]): boolean =>
      [x, y].every((at, i) => total * of(cells, (cell) => at[cell]) === cells.length * sum[i]);
    const moments = (cells: readonly number[]): number[] => [
      of(cells, (cell) => x[cell] * x[cell] * pitch_um[0] * pitch_um[0]) / 4,
      of(cells, (cell) => x[cell] * y[cell] * pitch_um[0] * pitch_um[1]) / 4,
      of(cells, (cell) => y[cell] * y[cell] * pitch_um[1] * pitch_um[1]) / 4,
    ];
    const whole = moments(bits);
    for (const lone of bits.filter((cell) => zero([cell]))) {
      for (const two of picks(
        bits.filter((cell) => cell !== lone),
        2,
      )) {
        if (!zero(two)) continue;
        const norms = [[lone], two, [lone, ...two]].map((cells) => {
          const [xx, xy, yy] = moments(cells).map((value, i) => value - (cells.length / total) * whole[i]);
          return Math.max(Math.abs(xx + yy), Math.hypot(xx - yy, 2 * xy));
        });
        least = Math.min(least, Math.max(...norms));
      }
    }
  }
  return 1e-6 * least;
}

describe('lower bound of the second order', () => {
  it.each([
    [7, 9, 6, 0.0056],
    [15, 17, 8, 0.00543],
    [31, 33, 10, 0.00524],
  ])('square pitch, %d x %d, %d bits: %d LSB (closed enumeration, D)', (rows, columns, bits, wanted) => {
    expect(lowerBound(core(rows, columns), binary(bits))?.inl_lsb.toFixed(5)).toBe(wanted.toFixed(5));
  });

  it.each([
    [core(3, 3), 6],
    [core(3, 3, [7.2, 5.7]), 6],
    [core(1, 7), 4],
    [core(3, 3, [1, 1.3]), 4],
    [core(3, 5), 12],
    [core(3, 5), 10],
    [core(5, 3, [7.2, 5.7]), 10],
    [core(3, 5, [1, 1.7]), 8],
  ])(
    'three capacitors: what the best of all placements reaches, with fill too (%o, 1 + 2 + %d units)',
    (given, rest) => {
      // With three capacitors the subsets of two of them are all codes there are, so the bound is reached.
      const bound = lowerBound(given, bitsOf([1, 2, rest]));
      expect((bound?.inl_lsb_per_ppm_per_um2 ?? NaN) / leastByTryingAll(given, rest)).toBeCloseTo(1, 12);
    },
  );

  it('is never above a placement of zero first order', () => {
    // Reflected pairs at random, the LSB at the centre, fill in pairs too.
    const any = fc.constantFrom(
      { rows: 5, columns: 3, weights: [1, 2, 4, 8] },
      { rows: 3, columns: 5, weights: [1, 2, 4, 6] },
      { rows: 5, columns: 7, weights: [1, 2, 4, 8, 16] },
      { rows: 7, columns: 9, weights: [1, 2, 4, 8, 16, 32] },
      { rows: 5, columns: 5, weights: [1, 2, 6, 6, 10] },
    );
    const pitches = fc.tuple(fc.constantFrom(1, 5.7, 7.2), fc.constantFrom(1, 1.3, 5.7));
    fc.assert(
      fc.property(
        any,
        pitches,
        fc.infiniteStream(fc.nat({ max: 1_000_000 })),
        ({ rows, columns, weights }, pitch, random) => {
          const capacitors = bitsOf(weights);
          const half = (rows * columns - 1) / 2;
          const names = capacitors.slice(1).flatMap(({ name, units }) => new Array<string>(units / 2).fill(name));
          while (names.length < half) names.push('-');
          for (let i = half - 1; i > 0; i--) {
            const j = (random.next().value as number) % (i + 1);
            [names[i], names[j]] = [names[j], names[i]];
          }
          const flat = [...names, 'B0', ...[...names].reverse()];
          const cells = Array.from({ length: rows }, (_, row) => flat.slice(row * columns, (row + 1) * columns));
          const { first, second } = analyseGradient({ core: core(rows, columns, pitch), capacitors, cells });
          expect(first.inl_lsb).toBe(0);
          expect(second.lowerBound_inl_lsb).toBeGreaterThan(0);
          expect(second.lowerBound_inl_lsb).toBeLessThanOrEqual(second.inl_lsb);
        },
      ),
      { numRuns: 200 },
    );
  });

  it('is absent where a condition fails', () => {
    const bits = binary(4);
    expect(lowerBound(core(3, 5), bits)).toBeDefined();
    expect(lowerBound(core(4, 4), bits)).toBeUndefined();
    expect(lowerBound(core(3, 3), bits)).toBeUndefined();
    expect(lowerBound(core(3, 5), bitsOf([1, 1, 2, 11]))).toBeUndefined();
    expect(lowerBound(core(3, 5), bitsOf([1, 2, 2, 10]))).toBeUndefined();
    expect(lowerBound(core(3, 5), bits.map((bit) => ({ ...bit, weight: 2 * bit.weight })))).toBeUndefined(); // prettier-ignore
    // Fill that can reach W pitches: 8 cells, 3 pitches each, W = 13; too many sets: 18 cells of 529.
    expect(lowerBound(core(3, 7), bitsOf([1, 2, 10]))).toBeUndefined();
    expect(lowerBound(core(23, 23), binary(9))).toBeUndefined();
    // One fill cell can only balance at the centre, which is the LSB's: no placement of zero first order.
    expect(lowerBound(core(3, 3), bitsOf([1, 2, 5]))).toBeUndefined();
  });

  it('metrics show it only with a zero first order and the termination outside', () => {
    const bits = binary(2);
    const bound = (cells: string[][], capacitors = bits): unknown =>
      analyseGradient({ core: core(cells.length, cells[0].length), capacitors, cells }).second.lowerBound_inl_lsb;
    expect(bound([['B1', 'B0', 'B1']])).toBeGreaterThan(0);
    expect(bound([['B0', 'B1', 'B1']])).toBeUndefined();
    const withTermination: Capacitor[] = [...binary(3), { name: 'TERM', role: 'termination', weight: 1, units: 2 }];
    const cells = [['B2', 'TERM', 'B1'], ['B2', 'B0', 'B2'], ['B1', 'TERM', 'B2']]; // prettier-ignore
    expect(bound(cells, withTermination)).toBeUndefined();
    expect(bound(cells.map((line) => line.map((name) => (name === 'TERM' ? '-' : name))), withTermination)).toBeGreaterThan(0); // prettier-ignore
  });
});
