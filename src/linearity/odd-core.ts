import type { Core } from '../spec/floorplan.js';
import { pitchNm } from './figures.js';
import { spreadOf } from './fill-sets.js';
import type { Places, Spread } from './fill-sets.js';
import { offset2 } from './moments.js';

/** Sums below this are exact in doubles, and so are sixteen of them. */
const EXACT = 562_949_953_421_312; // 2^49

/**
 * Second-order residuals on an odd x odd core, in whole numbers small enough for doubles: W S - w T for a capacitor of w LSB whose
 * cells' second moments are S, W and T those of all bits, in half-pitches of the pitch divided by what px and py have in common.
 */
export class OddCore {
  readonly places: Places;
  /** Second moments of all cells. */
  readonly whole: Spread;
  /** Square of `common` squared: from this class's squares to those in half-nanometres squared. */
  readonly unit: bigint;
  /** px^2, px py and py^2, divided by the square of `common`. */
  readonly scale: Spread;

  /** @throws RangeError where rows or columns are even, or a pitch is no whole number of nanometres. */
  constructor({ rows, columns, pitch_um }: Core) {
    if (rows % 2 === 0 || columns % 2 === 0) throw new RangeError(`a core of ${rows} x ${columns} has no centre cell`);
    const x = Int32Array.from({ length: rows * columns }, (_, cell) => offset2(cell % columns, columns));
    const y = Int32Array.from({ length: rows * columns }, (_, cell) => -offset2(Math.floor(cell / columns), rows));
    this.places = { rows, columns, x, y };
    this.whole = spreadOf(this.places, Array.from(x.keys()));
    const pitch = pitchNm(pitch_um);
    const common = greatestCommonDivisor(...pitch);
    const [px, py] = pitch.map((p) => p / common);
    this.scale = { xx: px * px, xy: px * py, yy: py * py };
    const square = BigInt(common) * BigInt(common);
    this.unit = square * square;
  }

  /** Whether residuals of bits that weigh `total` together are exact in doubles. */
  holds(total: number): boolean {
    return total * (this.scale.xx * this.whole.xx + this.scale.yy * this.whole.yy) < EXACT;
  }

  /** Residual of a capacitor of `weight` of `total` LSB: trace, xx - yy and 2 xy. */
  residual(total: number, bits: Spread, weight: number, own: Spread): readonly [t: number, u: number, v: number] {
    const xx = this.scale.xx * (total * own.xx - weight * bits.xx);
    const yy = this.scale.yy * (total * own.yy - weight * bits.yy);
    return [xx + yy, xx - yy, 2 * this.scale.xy * (total * own.xy - weight * bits.xy)];
  }
}

export const without = (a: Spread, b: Spread): Spread => ({ xx: a.xx - b.xx, xy: a.xy - b.xy, yy: a.yy - b.yy });

function greatestCommonDivisor(a: number, b: number): number {
  return b === 0 ? a : greatestCommonDivisor(b, a % b);
}
