import { visitPairSets } from '../linearity/fill-sets.js';
import type { Spread } from '../linearity/fill-sets.js';
import { latticeValues } from '../linearity/lattice-values.js';
import type { LatticeValue } from '../linearity/lattice-values.js';
import { OddCore, without } from '../linearity/odd-core.js';
import { Limit, PartialCodes } from '../linearity/partial-codes.js';
import type { Capacitor, Core } from '../spec/floorplan.js';
import { isLeastImage, pairMirrors } from './pair-mirrors.js';
import { SubsetFinder, SubsetsBySum, visitSubsets } from './subset-sums.js';
import type { Items } from './subset-sums.js';

export interface ExactRequest {
  /** Rows and columns odd. */
  readonly core: Core;
  /** Straight binary, weights = units; see `isSearchable`. */
  readonly bits: readonly Capacitor[];
  /** `squared` of a placement at hand: only lower ones are looked for. */
  readonly incumbent?: bigint;
}

interface ExactBest {
  /** As `secondOrderInl` has it. */
  readonly squared: bigint;
  /** Index into `bits` of every cell, row by row from the top; the number of bits stands for fill. */
  readonly netOfCell: Uint8Array;
}

/**
 * "proved": no point-reflected placement has a lower second order than `best`, or than the incumbent where there is no `best`.
 * "effort-spent": too many for the work that is allowed.
 */
export type ExactStatus = 'running' | 'proved' | 'effort-spent';

const MOST_BITS = 6;
const MOST_FILL_SETS = 20_000;
/** Sums of second moments are told apart below this, see `Items`. */
const MOST_SPREAD = 131_072; // 2^17
const MOST_WORK = 200_000_000;
/** A round's ceiling is an eighth above the last one's, as a square. */
const RISE = 8n;

/** Whether there is an exact search for these bits on this core: 2 to 6 straight binary ones, odd x odd, little fill. */
export function isSearchable(core: Core, bits: readonly Capacitor[]): boolean {
  const { rows, columns } = core;
  const sorted = bits.map((bit) => bit.units).sort((a, b) => a - b);
  const binary = sorted.every((units, k) => units === 1 << k) && bits.every((bit) => bit.weight === bit.units);
  if (!binary || bits.length < 2 || bits.length > MOST_BITS) return false;
  const total = (1 << bits.length) - 1;
  if (rows % 2 === 0 || columns % 2 === 0 || rows * columns < total) return false;
  const odd = new OddCore(core);
  const small = odd.whole.xx < MOST_SPREAD && odd.whole.yy < MOST_SPREAD && odd.holds(total);
  // As many fill sets as there are ways to pick their pairs.
  const pairs = (rows * columns - 1) / 2;
  let fillSets = 1;
  for (let i = 0; i < (rows * columns - total) / 2; i++) fillSets = (fillSets * (pairs - i)) / (i + 1);
  return small && fillSets <= MOST_FILL_SETS;
}

/** Sets of pairs in the order in which they are decided: fill, B1, B2, ... */
type Sets = readonly (readonly number[])[];

/** What stands under a fill set. */
interface Under {
  readonly fill: readonly number[];
  /** The other pairs. */
  readonly free: readonly number[];
  /** Second moments of all bits' cells. */
  readonly bits: Spread;
}

/**
 * The least second order over all point-reflected placements of N straight binary bits on an odd x odd core: the LSB at the centre, the
 * others and the fill in reflected pairs.
 *
 * The fill's, B1's and B2's pairs are tried in all their ways, the most promising first, and left as soon as the codes of what is decided
 * reach the best so far: with more bits there are more codes. The largest bit takes what the others leave, and its residual is minus
 * the sum of theirs. Of B3 (and B4) only the second moments are tried, multiples of 8 half-pitches squared in the small region that the
 * codes leave; of those that would do, in order of what they would reach, the first is taken that some pairs add up to:
 *
 *     fill, B1, B2     sets of pairs
 *     B3 (N > 4)       moments, then the sets of 4 pairs that have them
 *     B4 (N = 6)       moments, then whether 8 of the remaining pairs have them, by halves
 *     B(N-1)           what is left
 *
 * It depends on the request alone, not on how the work is cut into steps.
 */
export class ExactSearch {
  readonly #bits: readonly Capacitor[];
  readonly #odd: OddCore;
  readonly #items: Items;
  readonly #mirrors: readonly Int32Array[];
  readonly #total: number;
  readonly #steps: Generator<void, void, void>;
  #limit = new Limit(0n);
  #found: { readonly reduced: bigint; readonly sets: Sets } | undefined;
  #status: ExactStatus = 'running';
  #progress = 0;
  #work = 0;

  /** @throws RangeError where `isSearchable` says no. */
  constructor({ core, bits, incumbent }: ExactRequest) {
    if (!isSearchable(core, bits)) throw new RangeError('no exact search for these bits on this core');
    this.#bits = bits;
    this.#odd = new OddCore(core);
    this.#mirrors = pairMirrors(core);
    this.#total = (1 << bits.length) - 1;
    const { x, y } = this.#odd.places;
    const pairs = (x.length - 1) / 2;
    this.#items = {
      xx: Int32Array.from({ length: pairs }, (_, pair) => 2 * x[pair] * x[pair]),
      xy: Int32Array.from({ length: pairs }, (_, pair) => 2 * x[pair] * y[pair]),
      yy: Int32Array.from({ length: pairs }, (_, pair) => 2 * y[pair] * y[pair]),
    };
    this.#steps = this.#rounds(incumbent);
  }

  get status(): ExactStatus {
    return this.#status;
  }

  /** 0 to 1, of what can be foreseen. */
  get progress(): number {
    return this.#status === 'running' ? this.#progress : 1;
  }

  /** Sets, moments and parts of sets looked at. */
  get work(): number {
    return this.#work;
  }

  /** Goes on for some `work`, or a little more. @returns whether there is more to do. */
  step(work: number): boolean {
    const until = this.#work + Math.max(1, work);
    while (this.#status === 'running' && this.#work < until) {
      if (this.#steps.next().done) this.#status = 'proved';
      else if (this.#work > MOST_WORK) this.#status = 'effort-spent';
    }
    return this.#status === 'running';
  }

  /** The best so far; undefined as long as it is the incumbent, or there is none. */
  best(): ExactBest | undefined {
    if (!this.#found) return undefined;
    const { reduced, sets } = this.#found;
    const count = this.#bits.length;
    // Place of each bit among the given ones, by weight: 1, 2, 4, ...
    const net = this.#bits.map((_, k) => this.#bits.findIndex((bit) => bit.units === 1 << k));
    const cells = this.#odd.places.x.length;
    const netOfCell = new Uint8Array(cells).fill(net[count - 1]);
    netOfCell[(cells - 1) / 2] = net[0];
    sets.forEach((set, k) => {
      for (const pair of set) netOfCell[pair] = netOfCell[cells - 1 - pair] = k === 0 ? count : net[k];
    });
    return { squared: this.#odd.unit * reduced, netOfCell };
  }

  /**
   * Rounds below ceilings that rise from what the LSB alone has to the incumbent: what is found in one is the best of all, since the
   * round goes on until there is nothing less. Far above the best there would be very many moments to look at.
   */
  *#rounds(incumbent: bigint | undefined): Generator<void, void, void> {
    const { unit } = this.#odd;
    const unders = this.#fillSets();
    // Squares are multiples of `unit`.
    const least = incumbent === undefined ? undefined : (incumbent + unit - 1n) / unit;
    let ceiling = PartialCodes.none.exactlyWith(...this.#lsb(unders[0]));
    for (;;) {
      ceiling += ceiling / RISE + 1n;
      if (least !== undefined && ceiling > least) ceiling = least;
      this.#limit = new Limit(ceiling);
      for (const [i, under] of unders.entries()) {
        this.#progress = Math.max(this.#progress, i / unders.length);
        yield* this.#decide(under, 0, PartialCodes.none, this.#lsb(under), [under.fill], under.free);
      }
      if (this.#found || ceiling === least) return;
    }
  }

  #fillSets(): Under[] {
    const { places, whole } = this.#odd;
    const cells = places.x.length;
    const unders: Under[] = [];
    visitPairSets(places, cells - this.#total, (set, spread) => {
      const fill = set.filter((cell) => 2 * cell < cells - 1);
      if (!isLeastImage([fill], this.#mirrors)) return;
      const free = Array.from({ length: (cells - 1) / 2 }, (_, pair) => pair).filter((pair) => !fill.includes(pair));
      unders.push({ fill, free, bits: without(whole, spread) });
    });
    return unders;
  }

  #lsb({ bits }: Under): LatticeValue['residual'] {
    this.#work++;
    return this.#odd.residual(this.#total, bits, 1, { xx: 0, xy: 0, yy: 0 });
  }

  /** Takes a residual for bit k, whose pairs are in `sets` already, and goes on to the next, if it may be below the limit. */
  *#decide(
    under: Under,
    k: number,
    before: PartialCodes,
    residual: LatticeValue['residual'],
    sets: Sets,
    free: readonly number[],
  ): Generator<void, void, void> {
    if (!before.isBelow(this.#limit, ...residual)) return;
    if (k === this.#bits.length - 2) {
      this.#keep(before.exactlyWith(...residual), sets);
      return;
    }
    const decided = before.with(...residual);
    if (k < 2) yield* this.#trySets(under, k + 1, decided, sets, free);
    else yield* this.#tryMoments(under, decided, sets, free);
  }

  #keep(reduced: bigint, sets: Sets): void {
    this.#found = { reduced, sets };
    this.#limit = new Limit(reduced);
  }

  /** Bit k, of 1 or 2 pairs. */
  *#trySets(
    under: Under,
    k: number,
    decided: PartialCodes,
    sets: Sets,
    free: readonly number[],
  ): Generator<void, void, void> {
    const tries: {
      readonly set: readonly number[];
      readonly residual: LatticeValue['residual'];
      readonly largest: number;
    }[] = [];
    visitSubsets(this.#items, free, 1 << (k - 1), (set, sum) => {
      this.#work++;
      const residual = this.#odd.residual(this.#total, under.bits, 1 << k, sum);
      const largest = decided.largestWith(...residual);
      if (largest <= this.#limit.high) tries.push({ set: [...set], residual, largest });
    });
    yield;
    tries.sort((a, b) => a.largest - b.largest);
    for (const { set, residual, largest } of tries) {
      if (largest > this.#limit.high) break;
      const more = [...sets, set];
      if (!isLeastImage(more, this.#mirrors)) continue;
      yield* this.#decide(
        under,
        k,
        decided,
        residual,
        more,
        free.filter((pair) => !set.includes(pair)),
      );
    }
  }

  /** B3, and B4 of six bits, by their moments. */
  *#tryMoments(under: Under, decided: PartialCodes, sets: Sets, free: readonly number[]): Generator<void, void, void> {
    const limit = this.#limit;
    const values = (weight: number, before: PartialCodes): LatticeValue[] => {
      const list = latticeValues(this.#odd, this.#total, under.bits, weight, before, limit);
      this.#work += 1 + list.length;
      return list;
    };
    const hopes: Hope[] = [];
    for (const three of values(8, decided)) {
      if (this.#bits.length === 5) hopes.push({ before: decided, three: three.spread, last: three });
      else {
        const before = decided.with(...three.residual);
        for (const four of values(16, before)) hopes.push({ before, three: three.spread, last: four });
        yield;
      }
    }
    if (hopes.length === 0) return;
    hopes.sort((a, b) => a.last.largest - b.last.largest);
    const threes = new SubsetsBySum(this.#items, free, 4);
    this.#work += threes.work;
    const finders = new Map<readonly number[], SubsetFinder>();
    for (const { before, three, last } of hopes) {
      if (last.largest > this.#limit.high) break;
      if (!before.isBelow(this.#limit, ...last.residual)) continue;
      for (const set of threes.with(three)) {
        yield;
        this.#work++;
        const more = [...sets, set];
        if (this.#bits.length === 6) {
          const finder =
            finders.get(set) ??
            new SubsetFinder(
              this.#items,
              free.filter((pair) => !set.includes(pair)),
              8,
            );
          finders.set(set, finder);
          this.#work += finder.work;
          const eight = finder.find(8, last.spread);
          if (!eight) continue;
          more.push(eight);
        }
        this.#keep(before.exactlyWith(...last.residual), more);
        break;
      }
    }
  }
}

/** Moments of B3, and of B4 where that is not the largest bit: `last` is of the one decided last. */
interface Hope {
  readonly before: PartialCodes;
  readonly three: Spread;
  readonly last: LatticeValue;
}
