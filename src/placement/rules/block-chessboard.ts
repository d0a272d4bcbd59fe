import { interleave } from './interleaved.js';
import { Square, byRadiusThenAngle, dealByShare, isUpper } from './square.js';

/**
 * All bits but the two largest interleaved in a square of half the side; around it these two in blocks of two by two cells, dealt in
 * reflected pairs from the inside out by the same rule. Blocks save wires where most of the units are. The frame of four bits is one cell
 * wide: there a block is a cell.
 *
 * After N. Karmokar, A. K. Sharma, J. Poojary, M. Madhusudan, R. Harjani, S. S. Sapatnekar, "Constructive Placement and Routing for
 * Common-Centroid Capacitor Arrays in Binary-Weighted and Split DACs", IEEE Transactions on Computer-Aided Design of Integrated Circuits and
 * Systems, 2023 (from memory).
 */
export function blockChessboard(bits: number): number[][] {
  const square = new Square(1 << (bits / 2));
  const { side } = square;
  interleave(square, bits - 2);
  const size = bits === 4 ? 1 : 2;
  // Blocks are the cells of a coarser square.
  const blocks = new Square(side / size)
    .positions()
    .filter((block) => isUpper(block) && Math.max(Math.abs(block.x), block.y) * size > side / 2)
    .sort(byRadiusThenAngle);
  const next = dealByShare(
    new Map([
      [bits - 2, blocks.length / 3],
      [bits - 1, (blocks.length / 3) * 2],
    ]),
    blocks.length,
    1,
  );
  for (const block of blocks) {
    const bit = next();
    for (let dx = 1 - size; dx < size; dx += 2)
      for (let dy = 1 - size; dy < size; dy += 2)
        square.setPair({ x: block.x * size + dx, y: block.y * size + dy }, bit);
  }
  return square.rows();
}
