import type { Capacitor, Core } from '../spec/floorplan.js';
import { onePercent, perPpmPerUm2 } from './figures.js';
import { visitPairSets, visitZeroSumSets } from './fill-sets.js';
import type { Spread, VisitSets } from './fill-sets.js';
import { OddCore, without } from './odd-core.js';
import { Limit, PartialCodes } from './partial-codes.js';

/** In the units of a placement's own second order, so that `squared` equal to its own proves it the best. */
export interface SecondOrderBound {
  /** (2 W times the residual in half-nanometres squared)^2. */
  readonly squared: bigint;
  readonly inl_lsb: number;
  readonly inl_lsb_per_ppm_per_um2: number;
}

/**
 * Which placements a bound or a proof is about: all whose first order is exactly 0, or those of them whose capacitors and fill are each
 * symmetric about the centre.
 */
export type PlacementClass = 'zero-first-order' | 'point-reflected';

const SETS: Readonly<Record<PlacementClass, VisitSets>> = {
  'zero-first-order': visitZeroSumSets,
  'point-reflected': visitPairSets,
};

/** Pairs times fill sets that are looked at; more than that, and there is no bound. */
const MOST_WORK = 4_000_000;
/** The same where a third capacitor is looked at too, the sets of 4 cells, and the trials of one of them with a pair and a fill set. */
const MOST_HEADS = 200_000;
const MOST_FOURS = 120_000;
const MOST_TRIALS = 2_000_000;

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
  const frame = frameOf(core, bits, 'zero-first-order');
  if (frame === undefined || frame.heads > MOST_WORK) return undefined;
  let least: Limit | undefined;
  visitHeads(frame, ({ one, pair }) => {
    if (one.isBelow(least, ...pair)) least = new Limit(one.exactlyWith(...pair));
  });
  return least && boundOf(core, frame, least.squared);
}

/**
 * The same with a third capacitor, of 4 units, in all its places beside the pair's: 4 cells of zero sum, or two reflected pairs
 * where the bound is to hold for point-reflected placements only. Never below `lowerBound`; with four capacitors and no
 * others it is what the best placement of the class has, since the fourth is minus the sum of three.
 *
 * @returns undefined where `lowerBound` is, without exactly one capacitor of 4 units, or where there are too many sets.
 */
export function strongerBound(
  core: Core,
  bits: readonly Capacitor[],
  placements: PlacementClass,
): SecondOrderBound | undefined {
  const frame = frameOf(core, bits, placements);
  if (frame === undefined || !isLone(bits, 4) || frame.heads > MOST_HEADS || frame.fours > MOST_FOURS) return undefined;
  const { odd, total } = frame;
  const fours = foursOf(frame);
  const heads: (Head & { readonly largest: number })[] = [];
  visitHeads(frame, (head) =>
    heads.push({ ...head, fill: [...head.fill], largest: head.one.largestWith(...head.pair) }),
  );
  heads.sort((a, b) => a.largest - b.largest);
  const taken = new Uint8Array(odd.places.x.length);
  let trials = 0;
  let least: Limit | undefined;
  for (const { one, pair, bits: spread, cell, fill, largest } of heads) {
    if (least && largest > least.high) break;
    if ((trials += fours.length) > MOST_TRIALS) return undefined;
    const two = one.with(...pair);
    const cells = [...fill, cell, taken.length - 1 - cell];
    for (const used of cells) taken[used] = 1;
    for (const four of fours) {
      if (four.cells.some((used) => taken[used])) continue;
      const residual = odd.residual(total, spread, 4, four.spread);
      if (two.isBelow(least, ...residual)) least = new Limit(two.exactlyWith(...residual));
    }
    for (const used of cells) taken[used] = 0;
  }
  return least && boundOf(core, frame, least.squared);
}

interface Frame {
  readonly odd: OddCore;
  readonly visitSets: VisitSets;
  /** W. */
  readonly total: number;
  /** Cells of fill. */
  readonly fill: number;
  /** About how many fill sets times pairs there are, and how many sets of four cells. */
  readonly heads: number;
  readonly fours: number;
}

/** A fill set and a pair for the 2-unit capacitor. */
interface Head {
  /** The 1-unit capacitor alone. */
  readonly one: PartialCodes;
  /** The residual of the 2-unit one. */
  readonly pair: readonly [t: number, u: number, v: number];
  /** Second moments of all bits. */
  readonly bits: Spread;
  /** The pair's lower cell, and cells of fill. */
  readonly cell: number;
  readonly fill: readonly number[];
}

const isLone = (bits: readonly Capacitor[], units: number): boolean =>
  bits.filter((bit) => bit.units === units).length === 1;

function frameOf(core: Core, bits: readonly Capacitor[], placements: PlacementClass): Frame | undefined {
  const { rows, columns } = core;
  const total = bits.reduce((sum, { units }) => sum + units, 0);
  const fill = rows * columns - total;
  if (rows % 2 === 0 || columns % 2 === 0 || fill < 0 || !isLone(bits, 1) || !isLone(bits, 2)) return undefined;
  if (bits.some((bit) => bit.weight !== bit.units)) return undefined;
  const pairs = (rows * columns - 1) / 2;
  const free = placements === 'zero-first-order';
  // |sum of the fill's coordinates| <= fill * half the core, in pitches; the sum of reflected pairs is 0.
  if (free && (fill * ((columns - 1) / 2) >= total || fill * ((rows - 1) / 2) >= total)) return undefined;
  const sets = (cells: number): number =>
    cells === 0 ? 1 : free ? choices(2 * pairs, cells - 1) / cells : choices(pairs, cells / 2);
  const odd = new OddCore(core);
  if (!odd.holds(total)) return undefined;
  return { odd, total, fill, visitSets: SETS[placements], heads: pairs * sets(fill), fours: sets(4) };
}

function choices(n: number, k: number): number {
  let product = 1;
  for (let i = 0; i < k; i++) product = (product * (n - i)) / (i + 1);
  return product;
}

/** @param visit called with a head whose `fill` is valid during the call. */
function visitHeads({ odd, total, fill, visitSets }: Frame, visit: (head: Head) => void): void {
  const { places, whole } = odd;
  const last = places.x.length - 1;
  visitSets(places, fill, (filled, spread) => {
    const bits = without(whole, spread);
    const one = PartialCodes.none.with(...odd.residual(total, bits, 1, NOWHERE));
    for (let cell = 0; cell < last / 2; cell++) {
      if (filled.includes(cell) || filled.includes(last - cell)) continue;
      const [x, y] = [places.x[cell], places.y[cell]];
      const pair = odd.residual(total, bits, 2, { xx: 2 * x * x, xy: 2 * x * y, yy: 2 * y * y });
      visit({ one, pair, bits, cell, fill: filled });
    }
  });
}

/** Second moments of the centre cell. */
const NOWHERE: Spread = { xx: 0, xy: 0, yy: 0 };

function foursOf({ odd, visitSets }: Frame): { readonly cells: readonly number[]; readonly spread: Spread }[] {
  const fours: { cells: readonly number[]; spread: Spread }[] = [];
  visitSets(odd.places, 4, (cells, spread) => fours.push({ cells: [...cells], spread }));
  return fours;
}

function boundOf(core: Core, { odd, total }: Frame, reduced: bigint): SecondOrderBound {
  const squared = odd.unit * reduced;
  const perPpm = perPpmPerUm2(squared, BigInt(total));
  return { squared, inl_lsb: perPpm * onePercent(core, 2), inl_lsb_per_ppm_per_um2: perPpm };
}
