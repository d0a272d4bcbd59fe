import type { Correlation } from './correlation.js';

// A correlation is split into a multiple of 2^-24 and a rest of at most 2^-25 that is a multiple of 2^-50. Over the 2^27 pairs of 16,383
// units the former add up to less than 2^(27 + 24) multiples, the latter to at most 2^(27 + 25): below 2^53, so every sum is exact.
const COARSE = 16777216;
const FINE = 67108864;

/** Correlations are rounded to multiples of 1 / GRAIN = 2^-50. */
export const GRAIN = 1n << 50n;

/** Cells of a core: `class` of each, the largest class left out, row by row from `start[row]`. */
interface Sites {
  readonly classOf: Uint8Array;
  readonly columnOf: Int32Array;
  readonly start: Int32Array;
}

/** Correlations by distance, [rows apart * columns + columns apart], in two parts (see above). */
interface Split {
  readonly columns: number;
  readonly coarse: Float64Array;
  readonly fine: Float64Array;
}

/**
 * Sums of the correlation over all pairs of a unit of capacitor k and a unit of capacitor l, a unit with itself included: the covariance of
 * two capacitors in variances of one unit. They are whole numbers of 2^-50 and do not depend on the order of the units: a mirrored or
 * turned floorplan gives the same.
 *
 * All cells together have a closed form (`wholeField`), so that the pairs of one class of cells, a capacitor's or those of none, follow
 * from all the others: the largest is left out, which saves three pairs in four of a binary array. Memory is that of the cells.
 *
 * @param names capacitors, by index. @param cells rows of capacitor names, as many as the correlation has; other names count for nothing.
 * At most 16,383 units.
 * @returns [k][l], `GRAIN` times the sum
 */
export function pairSums(
  names: readonly string[],
  cells: readonly (readonly string[])[],
  { columns, at }: Correlation,
): bigint[][] {
  const coarse = at.map((rho) => Math.round(rho * COARSE));
  const fine = at.map((rho, i) => Math.round((rho * COARSE - coarse[i]) * FINE));
  const split = { columns, coarse, fine };
  const indexOf = new Map(names.map((name, k) => [name, k]));
  const classes = cells.map((line) => line.map((name) => indexOf.get(name) ?? names.length));
  const count = names.length + 1;
  const size = new Array<number>(count).fill(0);
  for (const line of classes) for (const k of line) size[k]++;
  const largest = size.indexOf(Math.max(...size));

  const sums = sumsBetween(sitesOf(classes, largest), split, count);
  size.forEach((units, k) => {
    if (k !== largest) sums[k][k] += GRAIN * BigInt(units);
  });
  const withAll = wholeSums(classes, split, count);
  // What all cells have in common with l, less what the other classes have.
  const rest = (l: number): bigint => sums.reduce((sum, row, k) => (k === largest ? sum : sum - row[l]), withAll[l]);
  for (let l = 0; l < count; l++) if (l !== largest) sums[largest][l] = sums[l][largest] = rest(l);
  sums[largest][largest] = rest(largest);
  return sums.slice(0, -1).map((row) => row.slice(0, -1));
}

function sitesOf(classes: readonly (readonly number[])[], leftOut: number): Sites {
  const classOf: number[] = [];
  const columnOf: number[] = [];
  const start = [0];
  for (const line of classes) {
    line.forEach((k, column) => {
      if (k === leftOut) return;
      classOf.push(k);
      columnOf.push(column);
    });
    start.push(classOf.length);
  }
  return { classOf: Uint8Array.from(classOf), columnOf: Int32Array.from(columnOf), start: Int32Array.from(start) };
}

/** Sums over all ordered pairs of two different sites, by their classes. */
function sumsBetween(sites: Sites, split: Split, count: number): bigint[][] {
  const coarse = Array.from({ length: count }, () => new Float64Array(count));
  const fine = Array.from({ length: count }, () => new Float64Array(count));
  addPairs(sites, split, coarse, fine);
  const once = coarse.map((row, k) => Array.from(row, (sum, l) => BigInt(sum) * BigInt(FINE) + BigInt(fine[k][l])));
  return once.map((row, k) => row.map((sum, l) => sum + once[l][k]));
}

/** Adds for every site and every later one their correlation to the sums [class of the one][class of the later one]. */
function addPairs(
  { classOf, columnOf, start }: Sites,
  { columns, coarse, fine }: Split,
  coarseSums: readonly Float64Array[],
  fineSums: readonly Float64Array[],
): void {
  const rows = start.length - 1;
  for (let row = 0; row < rows; row++) {
    for (let i = start[row]; i < start[row + 1]; i++) {
      const coarseSum = coarseSums[classOf[i]];
      const fineSum = fineSums[classOf[i]];
      const column = columnOf[i];
      for (let other = row; other < rows; other++) {
        const apart = (other - row) * columns;
        const end = start[other + 1];
        for (let j = other === row ? i + 1 : start[other]; j < end; j++) {
          const across = columnOf[j] - column;
          const at = apart + (across < 0 ? -across : across);
          const l = classOf[j];
          coarseSum[l] += coarse[at];
          fineSum[l] += fine[at];
        }
      }
    }
  }
}

/** Sums over all pairs of any cell of the core and one of a class. */
function wholeSums(classes: readonly (readonly number[])[], { columns, coarse, fine }: Split, count: number): bigint[] {
  const fieldOfCoarse = wholeField(columns, coarse);
  const fieldOfFine = wholeField(columns, fine);
  const sums = new Array<bigint>(count).fill(0n);
  classes.forEach((line, row) =>
    line.forEach((k, column) => {
      sums[k] += BigInt(fieldOfCoarse(row, column)) * BigInt(FINE) + BigInt(fieldOfFine(row, column));
    }),
  );
  return sums;
}

/**
 * The sum of a table of distances over all cells of the core, seen from one of them: its four quadrants, each a rectangle of the table
 *
 *     up, left  |  up, right
 *     ----------+-----------     the lines between them belong to two quadrants, the cell itself to all four
 *     down, left| down, right       so the sum of the four loses each half line once and gains the cell once
 */
function wholeField(columns: number, table: Float64Array): (row: number, column: number) => number {
  const rows = table.length / columns;
  // within[r * columns + c]: sum over distances up to r and c.
  const within = new Float64Array(table.length);
  for (let r = 0; r < rows; r++) {
    let line = 0;
    for (let c = 0; c < columns; c++) {
      line += table[r * columns + c];
      within[r * columns + c] = line + (r > 0 ? within[(r - 1) * columns + c] : 0);
    }
  }
  return (row, column) => {
    let sum = table[0];
    for (const c of [column, columns - 1 - column]) sum -= within[c];
    for (const r of [row, rows - 1 - row]) {
      sum += within[r * columns + column] + within[r * columns + columns - 1 - column];
      sum -= within[r * columns];
    }
    return sum;
  };
}
