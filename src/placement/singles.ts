import type { Random } from '../core/random.js';

const ROUNDS = 8;

/**
 * Gives single cells to nets so that the first order is small: pairwise exchanges until none helps, from several random starts, the best of
 * them. The measure is half the sum of |a_k|, which bounds the first order from above and is equal to it where all residues lie on a line.
 *
 * @param at each cell's offset in half-pitches.
 * @param nets the nets to give out, one entry for each cell.
 * @param weight weight of each net, 0 for the fill.
 * @returns net of each cell.
 */
export function leastSinglesOrder(
  at: readonly (readonly [x: number, y: number])[],
  nets: readonly number[],
  weight: readonly number[],
  random: Random,
): number[] {
  let best: number[] = [...nets];
  let least = Infinity;
  for (let round = 0; round < ROUNDS; round++) {
    const given = [...nets];
    for (let i = given.length - 1; i > 0; i--) swap(given, i, random.below(i + 1));
    let value = residue(at, given, weight);
    for (let improved = true; improved;) {
      improved = false;
      for (let i = 0; i < given.length; i++) {
        for (let j = 0; j < i; j++) {
          if (given[i] === given[j]) continue;
          swap(given, i, j);
          const now = residue(at, given, weight);
          if (now < value) {
            value = now;
            improved = true;
          } else swap(given, i, j);
        }
      }
    }
    if (value < least) {
      least = value;
      best = given;
    }
  }
  return best;
}

function swap(list: number[], i: number, j: number): void {
  const kept = list[i];
  list[i] = list[j];
  list[j] = kept;
}

function residue(
  at: readonly (readonly [x: number, y: number])[],
  given: readonly number[],
  weight: readonly number[],
): number {
  const x = new Float64Array(weight.length);
  const y = new Float64Array(weight.length);
  let allX = 0;
  let allY = 0;
  let all = 0;
  at.forEach(([dx, dy], i) => {
    const net = given[i];
    x[net] = x[net] + dx;
    y[net] = y[net] + dy;
    if (weight[net] > 0) {
      allX += dx;
      allY += dy;
    }
  });
  for (const w of weight) all += w;
  let sum = 0;
  weight.forEach((w, net) => {
    if (w === 0) return;
    const ax = x[net] - (w / all) * allX;
    const ay = y[net] - (w / all) * allY;
    sum += Math.sqrt(ax * ax + ay * ay);
  });
  return sum / 2;
}
