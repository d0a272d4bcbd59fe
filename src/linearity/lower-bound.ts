import type { Capacitor, Core } from '../spec/floorplan.js';
import { perPpmPerUm2, pitchNm, onePercent } from './figures.js';
import { offset2 } from './moments.js';
import { nuclearNormSquared } from './worst-code.js';

/** In the units of a placement's own second order, so that `squared` equal to its own proves it the best. */
export interface SecondOrderBound {
  /** (2 W times the residual in half-nanometres squared)^2. */
  readonly squared: bigint;
  readonly inl_lsb: number;
  readonly inl_lsb_per_ppm_per_um2: number;
}

/** Pairs times fill sets that are looked at; more than that, and there is no bound. */
const MOST_WORK = 4_000_000;

/** Second moments in half-pitches squared. */
type Spread = readonly [xx: number, xy: number, yy: number];

/**
 * A bound below the second order of every placement of these bits on this core whose first order is exactly 0. The cells without a bit
 * are fill dummies.
 *
 * Conditions: weights = units, one capacitor of 1 unit and one of 2, odd x odd core. Zero first order means W S_k = w_k S for all bits k,
 * S_k the sum of the bit's cell centres, S of all bits' cells: minus that of the fill's, since the core's is 0. In pitches the
 * coordinates are whole numbers, and where |S| < W on each axis the single unit, at S / W, sits at 0; so S = 0 and all S_k = 0: the 2-unit capacitor
 * is a reflected pair +-r, and the fill has zero sum. The second moments of the bits, T = core - fill, and r then fix
 *
 *   B_0 = -T / W,   B_1 = 2 r r' - 2 T / W,   B_0 + B_1,
 *
 * and no maximum over codes is below the largest nuclear norm of these three. The least over all pairs and fill sets is the bound.
 *
 * @returns undefined where a condition fails, where the fill may reach W pitches, or where there are too many fill sets.
 */
export function lowerBound(core: Core, bits: readonly Capacitor[]): SecondOrderBound | undefined {
  const { rows, columns } = core;
  const total = bits.reduce((sum, { units }) => sum + units, 0);
  const fill = rows * columns - total;
  const lone = (units: number): boolean => bits.filter((bit) => bit.units === units).length === 1;
  if (rows % 2 === 0 || columns % 2 === 0 || fill < 0 || !lone(1) || !lone(2)) return undefined;
  if (bits.some((bit) => bit.weight !== bit.units)) return undefined;
  // |sum of the fill's coordinates| <= fill * half the core, in pitches.
  if (fill * ((columns - 1) / 2) >= total || fill * ((rows - 1) / 2) >= total) return undefined;

  const half = (rows * columns - 1) / 2;
  if (fill > 0 && choices(2 * half, fill - 1) * half > MOST_WORK) return undefined;
  const squared = leastSquaredNorm(core, total, fill);
  if (squared === undefined) return undefined;
  const perPpm = perPpmPerUm2(squared, BigInt(total));
  return { squared, inl_lsb: perPpm * onePercent(core, 2), inl_lsb_per_ppm_per_um2: perPpm };
}

const choices = (n: number, k: number): number => {
  let product = 1;
  for (let i = 0; i < k; i++) product = (product * (n - i)) / (i + 1);
  return product;
};

function leastSquaredNorm(core: Core, total: number, fill: number): bigint | undefined {
  const { rows, columns } = core;
  const centre = (rows * columns - 1) / 2;
  const xOf = (cell: number): number => offset2(cell % columns, columns);
  const yOf = (cell: number): number => -offset2(Math.floor(cell / columns), rows);
  const whole: [number, number, number] = [0, 0, 0];
  for (let cell = 0; cell < rows * columns; cell++) {
    whole[0] += xOf(cell) * xOf(cell);
    whole[1] += xOf(cell) * yOf(cell);
    whole[2] += yOf(cell) * yOf(cell);
  }
  const [px, py] = pitchNm(core.pitch_um);
  const norm2 = (xx: number, xy: number, yy: number): number => {
    const trace = px * px * xx + py * py * yy;
    const difference = px * px * xx - py * py * yy;
    const cross = 2 * px * py * xy;
    return Math.max(trace * trace, difference * difference + cross * cross);
  };
  const [bx, by] = [BigInt(px), BigInt(py)];
  const exactNorm2 = (xx: bigint, xy: bigint, yy: bigint): bigint =>
    4n * nuclearNormSquared(bx * bx * xx, bx * by * xy, by * by * yy);

  // A double is off by a few 2^-53, relatively: in the larger of trace and difference no cancellation goes below its own terms. So whatever
  // is least exactly is among those within 1e-12 of the least double, and those are compared in whole numbers.
  let least = Infinity;
  let nearest: (readonly [pair: number, spread: Spread])[] = [];
  const consider = (pair: number, spread: Spread): void => {
    const [xx, xy, yy] = spread;
    const [x, y] = [xOf(pair), yOf(pair)];
    const [rxx, rxy, ryy] = [2 * total * x * x, 2 * total * x * y, 2 * total * y * y];
    // W times B_0, B_1 and their sum: -T, 2 W r r' - 2 T, 2 W r r' - 3 T.
    const largest = Math.max(
      norm2(xx, xy, yy),
      norm2(rxx - 2 * xx, rxy - 2 * xy, ryy - 2 * yy),
      norm2(rxx - 3 * xx, rxy - 3 * xy, ryy - 3 * yy),
    );
    if (largest > least * (1 + 1e-12)) return;
    if (largest * (1 + 1e-12) < least) nearest = [];
    if (largest < least) least = largest;
    nearest.push([pair, spread]);
  };
  const exact = ([pair, spread]: readonly [pair: number, spread: Spread]): bigint => {
    const [xx, xy, yy] = spread.map(BigInt);
    const [x, y, w2] = [BigInt(xOf(pair)), BigInt(yOf(pair)), BigInt(2 * total)];
    const norms = [0n, 2n, 3n].map((t) =>
      t === 0n ? exactNorm2(xx, xy, yy) : exactNorm2(w2 * x * x - t * xx, w2 * x * y - t * xy, w2 * y * y - t * yy),
    );
    return norms.reduce((a, b) => (a > b ? a : b));
  };

  const taken = new Uint8Array(rows * columns);
  const withFill = (spread: Spread): void => {
    for (let pair = 0; pair < centre; pair++) {
      // The reflection of cell i is cell 2 centre - i.
      if (!taken[pair] && !taken[2 * centre - pair]) consider(pair, spread);
    }
  };
  /** Takes `left` more fill cells, in descending order from below `before`; the last is the one that makes their sum 0. */
  const take = (left: number, before: number, x: number, y: number, [xx, xy, yy]: Spread): void => {
    if (left === 0) {
      withFill([xx, xy, yy]);
      return;
    }
    const without = (cell: number): Spread => [
      xx - xOf(cell) * xOf(cell),
      xy - xOf(cell) * yOf(cell),
      yy - yOf(cell) * yOf(cell),
    ];
    if (left === 1) {
      const column = (columns - 1 - x) / 2;
      const row = (rows - 1 + y) / 2;
      if (column < 0 || column >= columns || row < 0 || row >= rows) return;
      const cell = row * columns + column;
      if (cell >= before || cell === centre) return;
      taken[cell] = 1;
      take(0, cell, 0, 0, without(cell));
      taken[cell] = 0;
      return;
    }
    for (let cell = left - 1; cell < before; cell++) {
      if (cell === centre) continue;
      taken[cell] = 1;
      take(left - 1, cell, x + xOf(cell), y + yOf(cell), without(cell));
      taken[cell] = 0;
    }
  };
  take(fill, rows * columns, 0, 0, whole);
  return nearest.map(exact).reduce<bigint | undefined>((a, b) => (a === undefined || b < a ? b : a), undefined);
}
