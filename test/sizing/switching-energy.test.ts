import { describe, expect, it } from 'vitest';
import { switchings } from '../../src/spec/converter.js';
import type { Switching } from '../../src/spec/converter.js';
import { switchingEnergy } from '../../src/sizing/switching-energy.js';

/**
 * One array at the comparator: capacitors (in units) with their bottom plates on 0, Vref / 2 or Vref, top plates floating. The charge that
 * the reference delivers when bottom plates move follows from the charge on the top plates, which stays.
 */
class Side {
  readonly bottom: number[];
  top = 0;

  constructor(
    readonly capacitance: readonly number[],
    at: number,
  ) {
    this.bottom = capacitance.map(() => at);
  }

  /** Moves bottom plates. @returns energy from the reference, C Vref^2 */
  move(to: Moves): number {
    const total = this.capacitance.reduce((sum, c) => sum + c, 0);
    const charge = this.capacitance.map((c, i) => c * (this.bottom[i] - this.top));
    for (const [i, level] of to) {
      this.top += (this.capacitance[i] * (level - this.bottom[i])) / total;
      this.bottom[i] = level;
    }
    const delivered = (c: number, i: number): number => c * (this.bottom[i] - this.top) - charge[i];
    return this.capacitance.reduce((sum, c, i) => sum + (this.bottom[i] === 1 ? delivered(c, i) : 0), 0);
  }

  copy(): Side {
    const other = new Side(this.capacitance, 0);
    this.bottom.forEach((level, i) => (other.bottom[i] = level));
    other.top = this.top;
    return other;
  }
}

type Moves = readonly (readonly [capacitor: number, to: number])[];
interface Scheme {
  /** From the largest down, the termination last. */
  readonly capacitance: (bits: number) => number[];
  readonly start: number;
  /** Moves of both sides before the first decision, and after each but the last. */
  readonly first: (bits: number) => readonly [Moves, Moves];
  readonly after: (decision: number, up: boolean, bits: number) => readonly [Moves, Moves];
}
const opposite = (moves: Moves): [Moves, Moves] => [moves, moves.map(([i, level]) => [i, 1 - level] as const)];
const binary = (count: number): number[] => Array.from({ length: count }, (_, i) => 2 ** (count - 1 - i));

const schemes: Readonly<Record<Switching, Scheme>> = {
  conventional: {
    capacitance: (n) => [...binary(n), 1],
    start: 0,
    // The largest bit of the one side goes up, on the other all the rest.
    first: (n) => opposite(Array.from({ length: n + 1 }, (_, i) => [i, i === 0 ? 1 : 0] as const)),
    after: (k, up) => opposite([...(up ? [] : [[k, 0] as const]), [k + 1, 1]]),
  },
  splitMsb: {
    // The pieces of the largest bit, two of them of one unit, then the other bits and the termination.
    capacitance: (n) => [...binary(n - 1), 1, ...binary(n - 1), 1],
    start: 0,
    first: (n) => opposite(Array.from({ length: 2 * n }, (_, i) => [i, i < n ? 1 : 0] as const)),
    after: (k, up, n) => opposite([up ? [n + k, 1] : [k, 0]]),
  },
  monotonic: {
    capacitance: (n) => [...binary(n - 1), 1],
    start: 1,
    first: () => [[], []],
    after: (k, up) => (up ? [[[k, 0]], []] : [[], [[k, 0]]]),
  },
  vcmBased: {
    capacitance: (n) => [...binary(n - 1), 1],
    start: 0.5,
    first: () => [[], []],
    after: (k, up) => opposite([[k, up ? 0 : 1]]),
  },
};

/** Mean over all 2^n paths of decisions, every one as likely as any other: of both sides, and of the one. */
function meanEnergy({ capacitance, start, first, after }: Scheme, bits: number): [pair: number, one: number] {
  const walk = (p: Side, n: Side, decision: number): [number, number] => {
    if (decision === bits - 1) return [0, 0];
    const sums: [number, number] = [0, 0];
    for (const up of [true, false]) {
      const moves = after(decision, up, bits);
      const [a, b] = [p.copy(), n.copy()];
      const own = a.move(moves[0]);
      const other = b.move(moves[1]);
      const rest = walk(a, b, decision + 1);
      sums[0] += (own + other + rest[0]) / 2;
      sums[1] += (own + rest[1]) / 2;
    }
    return sums;
  };
  const [p, n] = [new Side(capacitance(bits), start), new Side(capacitance(bits), start)];
  const begin = first(bits);
  const own = p.move(begin[0]);
  const other = n.move(begin[1]);
  const rest = walk(p, n, 0);
  return [own + other + rest[0], own + rest[1]];
}

describe('mean switching energy', () => {
  // D: exact enumeration of all decision paths, n = 10, reset excluded; C Vref^2.
  it.each([
    ['conventional', 1363.333984],
    ['splitMsb', 852.333984],
    ['monotonic', 255.5],
    ['vcmBased', 170.166992],
  ] as const)('%s at 10 bits: %d (D)', (scheme, published) => {
    expect(Math.abs(switchingEnergy(scheme, 10).value - published)).toBeLessThan(1e-6);
  });

  const cases = switchings.flatMap((scheme) => [2, 3, 4, 5, 6, 7, 8, 10].map((bits) => [scheme, bits] as const));
  it.each(cases)('%s at %d bits: all decision paths, with charge conservation', (scheme, bits) => {
    const [pair, one] = meanEnergy(schemes[scheme], bits);
    expect(switchingEnergy(scheme, bits).value / pair).toBeCloseTo(1, 12);
    // What a single array draws.
    expect(one / pair).toBeCloseTo(0.5, 12);
  });
});
