import type { Spread } from './fill-sets.js';
import type { OddCore } from './odd-core.js';
import type { Limit, PartialCodes } from './partial-codes.js';

/** A reflected pair has 2 x^2, 2 x y and 2 y^2, x and y even numbers of half-pitches. */
const STEP = 8;

/** Second moments that a capacitor may have, and the square it brings about with those decided before, rounded. */
export interface LatticeValue {
  readonly spread: Spread;
  readonly residual: readonly [t: number, u: number, v: number];
  readonly largest: number;
}

/**
 * All second moments of a capacitor of `weight` of `total` LSB that keep it and the capacitors decided before below the limit, among
 * those that a number of reflected pairs could add up to, wherever these are: whether any pairs do is another question. They are
 * multiples of STEP, no larger than those of all bits, and (sum x y)^2 is at most sum x^2 times sum y^2.
 *
 * @param bits second moments of all bits' cells.
 */
export function latticeValues(
  odd: OddCore,
  total: number,
  bits: Spread,
  weight: number,
  decided: PartialCodes,
  limit: Limit,
): LatticeValue[] {
  const { t, u, v } = decided.room(limit);
  const { scale } = odd;
  // In t = x + y and u = x - y, with x = scale (total xx - weight bits) and so on, a range of x is one of multiples of STEP.
  const multiples = (scaled: number, mean: number, least: number, most: number): [from: number, to: number] => [
    STEP * Math.max(0, Math.ceil((least / scaled + weight * mean) / total / STEP)),
    Math.min(mean, STEP * Math.floor((most / scaled + weight * mean) / total / STEP)),
  ];
  const [fromX, toX] = multiples(scale.xx, bits.xx, (t[0] + u[0]) / 2, (t[1] + u[1]) / 2);
  const [fromXY, toXY] = [v[0], v[1]].map((edge) => (edge / (2 * scale.xy) + weight * bits.xy) / total / STEP);
  const values: LatticeValue[] = [];
  for (let xx = fromX; xx <= toX; xx += STEP) {
    const x = scale.xx * (total * xx - weight * bits.xx);
    const [fromY, toY] = multiples(scale.yy, bits.yy, Math.max(t[0] - x, x - u[1]), Math.min(t[1] - x, x - u[0]));
    for (let yy = fromY; yy <= toY; yy += STEP) {
      for (let xy = STEP * Math.ceil(fromXY); xy <= STEP * Math.floor(toXY); xy += STEP) {
        if (xy * xy > xx * yy) continue;
        const spread = { xx, xy, yy };
        const residual = odd.residual(total, bits, weight, spread);
        if (!decided.isBelow(limit, ...residual)) continue;
        values.push({ spread, residual, largest: decided.largestWith(...residual) });
      }
    }
  }
  return values;
}
