import type { Random } from '../core/random.js';

const RANDOM_ROUNDS = 16;
const RANDOM_TRIES = 256;
const SEARCH_NODES = 200_000;

/**
 * Triples of cells of zero sum (about the centre) for pairs of odd capacitors: one takes a triple, the other its mirror image, and
 * both keep their centroid at the centre. In a 3 x 3 core:
 *
 *     a . B        a a a: (-1, 1) + (1, 0) + (0, -1) = 0
 *     b   a        B b b: its point reflection
 *     . a b (for example)
 *
 * No cell is in two triples or mirror images, none is the centre.
 *
 * @param rows @param columns an odd x odd frame; its cell i is row * columns + column and the reflection of i is rows * columns - 1 - i.
 * @param count how many triples.
 * @param random which of the valid ones, leaning to those that spread as the whole frame does.
 * @returns 3 * count cells, a triple after the other; undefined if none were found: in small frames there are none then, in large
 * ones (some 200,000 trials) there is hardly a doubt.
 */
export function mirroredTriples(rows: number, columns: number, count: number, random: Random): Int32Array | undefined {
  if (count === 0) return new Int32Array(0);
  const cells = rows * columns;
  if (6 * count > cells - 1) return undefined;
  return scattered(rows, columns, count, random) ?? packed(rows, columns, count);
}

/** The third cell of a zero sum, or -1 if it lies outside, at the centre, or on one of the pairs of the first two. */
function third(rows: number, columns: number, a: number, b: number): number {
  // With rows and columns odd, offsets from the centre are whole pitches.
  const middleRow = (rows - 1) / 2;
  const middleColumn = (columns - 1) / 2;
  const rowA = Math.floor(a / columns);
  const rowB = Math.floor(b / columns);
  const row = 3 * middleRow - rowA - rowB;
  const column = 3 * middleColumn - (a - rowA * columns) - (b - rowB * columns);
  if (row < 0 || row >= rows || column < 0 || column >= columns) return -1;
  const c = row * columns + column;
  const last = rows * columns - 1;
  const clash = a === b || a + b === last || c === a || c === b || c + a === last || c + b === last || 2 * c === last;
  return clash ? -1 : c;
}

/** How far a triple's second moment is from three times the mean of the frame, each axis by its own spread. */
function imbalance(rows: number, columns: number, triple: readonly number[]): number {
  const meanYY = (rows * rows - 1) / 12;
  const meanXX = (columns * columns - 1) / 12;
  let xx = 0;
  let xy = 0;
  let yy = 0;
  for (const cell of triple) {
    const row = Math.floor(cell / columns);
    const y = row - (rows - 1) / 2;
    const x = cell - row * columns - (columns - 1) / 2;
    xx += x * x;
    xy += x * y;
    yy += y * y;
  }
  // A frame of one row or column has no spread, and no moment, across it.
  return (
    Math.abs(meanXX > 0 ? xx / meanXX - 3 : 0) +
    Math.abs(meanYY > 0 ? yy / meanYY - 3 : 0) +
    (meanXX > 0 && meanYY > 0 ? 2 * Math.abs(xy / Math.sqrt(meanXX * meanYY)) : 0)
  );
}

function scattered(rows: number, columns: number, count: number, random: Random): Int32Array | undefined {
  const cells = rows * columns;
  const last = cells - 1;
  for (let round = 0; round < RANDOM_ROUNDS; round++) {
    const taken = new Uint8Array(cells);
    taken[last / 2] = 1;
    const result = new Int32Array(3 * count);
    let found = 0;
    while (found < count) {
      let best: readonly number[] | undefined;
      let least = Infinity;
      for (let trial = 0; trial < RANDOM_TRIES; trial++) {
        const a = random.below(cells);
        const b = random.below(cells);
        if (taken[a] || taken[b]) continue;
        const c = third(rows, columns, a, b);
        if (c < 0 || taken[c]) continue;
        const triple = [a, b, c];
        const value = imbalance(rows, columns, triple);
        if (value < least) {
          least = value;
          best = triple;
        }
        // A few valid ones to choose from, not the best of all: starts shall differ.
        if (trial % 8 === 7 && best && trial >= 24) break;
      }
      if (!best) break;
      result.set(best, 3 * found++);
      for (const cell of best) taken[cell] = taken[last - cell] = 1;
    }
    if (found === count) return result;
  }
  return undefined;
}

/** Depth first over all triples in the order of their least pair: complete in small frames. */
function packed(rows: number, columns: number, count: number): Int32Array | undefined {
  const cells = rows * columns;
  const last = cells - 1;
  const half = last / 2;
  const taken = new Uint8Array(cells);
  const result = new Int32Array(3 * count);
  let nodes = 0;

  const place = (found: number, from: number): boolean => {
    if (found === count) return true;
    if (++nodes > SEARCH_NODES) return false;
    // Cell a stands for its pair (a, last - a); a triple and its mirror image are one choice, so a may be taken as the one below half.
    for (let a = from; a < half; a++) {
      if (taken[a]) continue;
      for (let b = a + 1; b < cells; b++) {
        if (taken[b] || b === half || b === last - a || Math.min(b, last - b) < a) continue;
        const c = third(rows, columns, a, b);
        if (c < b || taken[c] || Math.min(c, last - c) < a) continue;
        taken[a] = taken[b] = taken[c] = taken[last - a] = taken[last - b] = taken[last - c] = 1;
        result.set([a, b, c], 3 * found);
        if (place(found + 1, a + 1)) return true;
        taken[a] = taken[b] = taken[c] = taken[last - a] = taken[last - b] = taken[last - c] = 0;
      }
    }
    return false;
  };
  return place(0, 0) ? result : undefined;
}
