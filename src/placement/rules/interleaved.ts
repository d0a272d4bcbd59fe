import { Square, TERMINATION, byRadiusThenAngle, dealByShare, isUpper } from './square.js';

/** Fills the square about the centre that `bits` bits and the termination need. */
export function interleave(square: Square, bits: number): void {
  const half = 1 << (bits / 2);
  const pairs = (half * half) / 2;
  const quota = new Map(Array.from({ length: bits - 1 }, (_, b) => [b + 1, 1 << b]));
  const next = dealByShare(quota, pairs, 1);
  square
    .positions()
    .filter((position) => isUpper(position) && Math.abs(position.x) < half && position.y < half)
    .sort(byRadiusThenAngle)
    .forEach((position, pair) => {
      if (pair === 0) square.setPair(position, 0, TERMINATION);
      else square.setPair(position, next());
    });
}

/**
 * Reflected pairs from the centre out, by radius, then angle; the first to bit 0 and the termination, each further one to the bit that is
 * the furthest behind its share of the pairs so far. Centred and dispersed: the rule of common centroid and dispersion that several papers
 * on capacitor arrays state in words or other (no one author; from memory).
 */
export function interleaved(bits: number): number[][] {
  const square = new Square(1 << (bits / 2));
  interleave(square, bits);
  return square.rows();
}
