import type { Deal } from '../array/cost-term.js';

/**
 * First and second moments of every bit's cells about the core's centre, in half-pitches: x = 2 column - (columns - 1) to
 * the right, y = -(2 row - (rows - 1)) upwards (row 0 at the top). Whole numbers on odd and even cores alike, and exact in
 * doubles: 16,383 units on a core of 40,000 cells in one line add up to at most 16,383 * 40,000^2 = 2.6e13 < 2^53 = 9.0e15.
 */
export interface Moments {
  /** LSB, by bit. */
  readonly weight: readonly number[];
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly xx: Float64Array;
  readonly xy: Float64Array;
  readonly yy: Float64Array;
}

/** Distance of line `i` of `count` from the middle of them, in half-pitches. */
export const offset2 = (i: number, count: number): number => 2 * i - (count - 1);

/** The moments of nobody's cells yet, for `add` to fill. */
function noMoments(weight: readonly number[]): Moments {
  const zeros = (): Float64Array => new Float64Array(weight.length);
  return { weight, x: zeros(), y: zeros(), xx: zeros(), xy: zeros(), yy: zeros() };
}

/** Counts one cell, at (x, y) half-pitches, to bit `k`. */
function add(moments: Moments, k: number, x: number, y: number): void {
  moments.x[k] += x;
  moments.y[k] += y;
  moments.xx[k] += x * x;
  moments.xy[k] += x * y;
  moments.yy[k] += y * y;
}

/**
 * @param names bits, by index. @param cells rows of capacitor names from the top; what is no bit (dummies, the termination)
 * is left out.
 */
export function momentsOfCells(
  names: readonly string[],
  weight: readonly number[],
  cells: readonly (readonly string[])[],
): Moments {
  const moments = noMoments(weight);
  const indexOf = new Map(names.map((name, k) => [name, k]));
  cells.forEach((line, row) => {
    const y = -offset2(row, cells.length);
    line.forEach((name, column) => {
      const k = indexOf.get(name);
      if (k !== undefined) add(moments, k, offset2(column, line.length), y);
    });
  });
  return moments;
}

/** The moments of each block's cells: `weight` is of no use here, the index is the block's. */
export function momentsOfBlocks(deal: Deal): Moments {
  const { rows, columns, start, cells, netOfBlock } = deal;
  const moments = noMoments(new Array<number>(netOfBlock.length).fill(0));
  for (let block = 0; block < netOfBlock.length; block++) {
    for (let i = start[block]; i < start[block + 1]; i++) {
      const row = Math.floor(cells[i] / columns);
      add(moments, block, offset2(cells[i] - row * columns, columns), -offset2(row, rows));
    }
  }
  return moments;
}

/** The moments of the nets that have a weight, in the deal's order. */
export function momentsOfDeal(deal: Deal): Moments {
  const { nets, weight, netOfBlock } = deal;
  const bits = Array.from({ length: nets }, (_, net) => net).filter((net) => weight[net] > 0);
  const moments = noMoments(bits.map((net) => weight[net]));
  const indexOf = new Map(bits.map((net, k) => [net, k]));
  const blocks = momentsOfBlocks(deal);
  netOfBlock.forEach((net, block) => {
    const k = indexOf.get(net);
    if (k === undefined) return;
    for (const sum of ['x', 'y', 'xx', 'xy', 'yy'] as const) moments[sum][k] += blocks[sum][block];
  });
  return moments;
}
