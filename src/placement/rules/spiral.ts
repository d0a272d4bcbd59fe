import { Square, TERMINATION, byAngle, isUpper } from './square.js';
import type { Position } from './square.js';

/** Half the side of the square ring about the centre that a cell belongs to. */
const ring = ({ x, y }: Position): number => Math.max(Math.abs(x), Math.abs(y));

/**
 * The spiral: square rings about the centre from the inside out, each walked by angle over its first half. A cell on the way and its
 * reflection are a pair; the first pair goes to bit 0 and the termination, the next one to bit 1, and so on in the order of the bits.
 * Short wires, centred, hardly dispersed.
 *
 * After N. Karmokar, A. K. Sharma, J. Poojary, M. Madhusudan, R. Harjani, S. S. Sapatnekar, "Constructive Common-Centroid Placement and
 * Routing for Binary-Weighted Capacitor Arrays", DATE 2022 (from memory).
 */
export function spiral(bits: number): number[][] {
  const square = new Square(1 << (bits / 2));
  const walk = square
    .positions()
    .filter(isUpper)
    .sort((a, b) => ring(a) - ring(b) || byAngle(a, b));
  // Pair 0 is shared; pairs 2^(b - 1) to 2^b - 1 are those of bit b.
  walk.forEach((position, pair) => {
    if (pair === 0) square.setPair(position, 0, TERMINATION);
    else square.setPair(position, 32 - Math.clz32(pair));
  });
  return square.rows();
}
