import { Square, TERMINATION } from './square.js';

/** What one draws without a rule: the termination, then bit after bit, row by row from the top left. */
export function rowByRow(bits: number): number[][] {
  const square = new Square(1 << (bits / 2));
  // Place 0 is the termination's, places 2^b to 2^(b + 1) - 1 those of bit b.
  square.positions().forEach((position, place) => {
    square.set(position, place === 0 ? TERMINATION : 31 - Math.clz32(place));
  });
  return square.rows();
}
