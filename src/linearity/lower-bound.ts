import type { Capacitor, Core } from '../spec/floorplan.js';
import { perPpmPerUm2, pitchNm, onePercent } from './figures.js';
import { visitZeroSumSets } from './fill-sets.js';
import type { Places, Spread } from './fill-sets.js';
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

/**
 * A bound below the second order of every placement of these bits on this core whose first order is exactly 0. The cells
 * without a bit are fill dummies.
 *
 * Conditions: weights = units, one capacitor of 1 unit and one of 2, odd x odd core. Zero first order means W S_k = w_k S
 * for all bits k, S_k the sum of the bit's cell centres, S of all bits' cells: minus that of the fill's, since the core's is
 * 0. In pitches the coordinates are whole numbers, and where |S| < W on each axis the single unit, at S / W, sits at 0; so S
 * = 0 and all S_k = 0: the 2-unit capacitor is a reflected pair +-r, and the fill has zero sum. The second moments of the
 * bits, T = core - fill, and r then fix
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

  const pairs = (rows * columns - 1) / 2;
  if (fill > 0 && (choices(2 * pairs, fill - 1) / fill) * pairs > MOST_WORK) return undefined;
  const squared = leastSquaredNorm(core, total, fill);
  if (squared === undefined) return undefined;
  const perPpm = perPpmPerUm2(squared, BigInt(total));
  return { squared, inl_lsb: perPpm * onePercent(core, 2), inl_lsb_per_ppm_per_um2: perPpm };
}

function choices(n: number, k: number): number {
  let product = 1;
  for (let i = 0; i < k; i++) product = (product * (n - i)) / (i + 1);
  return product;
}

function leastSquaredNorm(core: Core, total: number, fill: number): bigint | undefined {
  const places = placesOf(core);
  const { x, y } = places;
  const centre = (x.length - 1) / 2;
  const whole = { xx: 0, xy: 0, yy: 0 };
  for (let cell = 0; cell < x.length; cell++) {
    whole.xx += x[cell] * x[cell];
    whole.yy += y[cell] * y[cell];
  }
  const [px, py] = pitchNm(core.pitch_um);
  const norm2 = (xx: number, xy: number, yy: number): number => {
    const trace = px * px * xx + py * py * yy;
    const difference = px * px * xx - py * py * yy;
    const cross = 2 * px * py * xy;
    return Math.max(trace * trace, difference * difference + cross * cross);
  };
  const [bx, by] = [BigInt(px), BigInt(py)];
  const exactNorm2 = (xx: number, xy: number, yy: number): bigint =>
    4n * nuclearNormSquared(bx * bx * BigInt(xx), bx * by * BigInt(xy), by * by * BigInt(yy));

  // A double is off by a few 2^-53, relatively: in the larger of trace and difference no cancellation goes below its own
  // terms. So what is least exactly is among those within 1e-12 of the least double, and those are compared in whole
  // numbers.
  let least = Infinity;
  let nearest: { readonly pair: number; readonly bits: Spread }[] = [];
  visitZeroSumSets(places, fill, (taken, spread) => {
    const bits = { xx: whole.xx - spread.xx, xy: whole.xy - spread.xy, yy: whole.yy - spread.yy };
    for (let pair = 0; pair < centre; pair++) {
      if (taken[pair] || taken[2 * centre - pair]) continue;
      const largest = largestOfThree(norm2, total, x[pair], y[pair], bits);
      if (largest > least * (1 + 1e-12)) continue;
      if (largest * (1 + 1e-12) < least) nearest = [];
      if (largest < least) least = largest;
      nearest.push({ pair, bits });
    }
  });
  let exact: bigint | undefined;
  for (const { pair, bits } of nearest) {
    const largest = largestOfThree(exactNorm2, total, x[pair], y[pair], bits);
    if (exact === undefined || largest < exact) exact = largest;
  }
  return exact;
}

/** The largest norm of W B_0, W B_1 and their sum: -T, 2 W r r' - 2 T and 2 W r r' - 3 T, whole numbers. */
function largestOfThree<T extends number | bigint>(
  norm2: (xx: number, xy: number, yy: number) => T,
  total: number,
  x: number,
  y: number,
  { xx, xy, yy }: Spread,
): T {
  const pair = 2 * total;
  const lone = norm2(xx, xy, yy);
  const two = norm2(pair * x * x - 2 * xx, pair * x * y - 2 * xy, pair * y * y - 2 * yy);
  const both = norm2(pair * x * x - 3 * xx, pair * x * y - 3 * xy, pair * y * y - 3 * yy);
  const larger = two > both ? two : both;
  return lone > larger ? lone : larger;
}

function placesOf({ rows, columns }: Core): Places {
  const x = Int32Array.from({ length: rows * columns }, (_, cell) => offset2(cell % columns, columns));
  const y = Int32Array.from({ length: rows * columns }, (_, cell) => -offset2(Math.floor(cell / columns), rows));
  return { rows, columns, x, y };
}
