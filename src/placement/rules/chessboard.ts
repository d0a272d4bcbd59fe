import { Square, TERMINATION } from './square.js';

/**
 * The chessboard. On a square lattice of cells, at first the whole core, the cells of even row plus column go to the largest bit; of the
 * others those on even rows to the next one. What is left, odd rows and even columns, is a lattice of half as many rows; and so on down to
 * the last cell, the termination's. Dispersed as far as can be; only the largest bit is centred.
 *
 * After F. Burcea, H. Habal, H. E. Graeb, "A New Chessboard Placement and Sizing Method for Capacitors in a Charge-Scaling DAC by Worst-Case
 * Analysis of Nonlinearity", IEEE Transactions on Computer-Aided Design of Integrated Circuits and Systems, 2016 (from memory).
 */
export function chessboard(bits: number): number[][] {
  const square = new Square(1 << (bits / 2));
  square.positions().forEach((position, place) => {
    let row = Math.floor(place / square.side);
    let column = place % square.side;
    let bit = bits - 1;
    for (; bit > 0; bit -= 2) {
      if ((row + column) % 2 === 0) break;
      if (row % 2 === 0) {
        bit--;
        break;
      }
      row = (row - 1) / 2;
      column /= 2;
    }
    square.set(position, bit >= 0 ? bit : TERMINATION);
  });
  return square.rows();
}
