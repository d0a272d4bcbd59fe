import type { ColumnLimit } from '../array/column-limit.js';
import type { Emphasis } from '../spec/array-spec.js';
import type { Dispersion } from './column-quotas.js';
import type { Arrangement } from './dealing.js';
import type { Work } from './effort.js';

/** A deal that plans the nets of every column first, at these prices; null deals freely. */
type ColumnPlan = { readonly moment: number; readonly dispersion: number } | null;

/**
 * What an emphasis weighs, each figure against what can be had of it: the second order against what a search for it alone reaches on the
 * same core and pitch, random mismatch against a well dispersed placement, column nets against the fewest that any placement could have.
 */
export interface Weighing {
  readonly second: number;
  /** The second order may grow to this multiple, and hardly beyond. */
  readonly limit: number;
  readonly mismatch: number;
  /** Up to this multiple mismatch hardly counts, beyond it heavily. */
  readonly mismatchLimit: number;
  readonly nets: number;
  /** Column nets up to this multiple of a chessboard's hardly count, beyond it heavily. */
  readonly netsLimit: number;
  /** The core's other orientation is as good if its second order is within this multiple of the better one's: the fewer column nets decide. */
  readonly orientation: number;
  /** The deals of the starts, in turn. */
  readonly plans: readonly ColumnPlan[];
}

const freely: readonly ColumnPlan[] = [null];

export const weighings: Readonly<Record<Emphasis, Weighing>> = {
  gradient: {
    second: 1,
    limit: Infinity,
    mismatch: 0,
    mismatchLimit: 0,
    nets: 0,
    netsLimit: 0,
    orientation: 1,
    plans: freely,
  },
  dispersed: {
    second: 0.3,
    limit: 1.2,
    mismatch: 3,
    mismatchLimit: 0,
    nets: 0,
    netsLimit: 0,
    orientation: 1,
    plans: freely,
  },
  balanced: {
    second: 0.2,
    limit: 1.35,
    mismatch: 0.6,
    mismatchLimit: 0,
    nets: 10,
    netsLimit: 0.745,
    orientation: 1.05,
    plans: [
      { moment: 0.4, dispersion: 10 },
      { moment: 0.6, dispersion: 10 },
      { moment: 0.8, dispersion: 12 },
      { moment: 0.4, dispersion: 8 },
      { moment: 1.2, dispersion: 10 },
      null,
    ],
  },
  wiring: {
    second: 0.3,
    limit: 1.35,
    mismatch: 0,
    mismatchLimit: 0,
    nets: 6,
    netsLimit: 0,
    orientation: Infinity,
    plans: [
      { moment: 0.7, dispersion: 0 },
      { moment: 0.5, dispersion: 0 },
      { moment: 1, dispersion: 0 },
      { moment: 0.35, dispersion: 0 },
      { moment: 1.3, dispersion: 0 },
      null,
    ],
  },
};

/** Weights between those of two emphases: `share` of the way from the one to the other. */
export interface Blend {
  readonly towards: Emphasis;
  readonly share: number;
}

export function weighingOf(emphasis: Emphasis, blend?: Blend): Weighing {
  const from = weighings[emphasis];
  if (blend === undefined) return from;
  const { share } = blend;
  const to = weighings[blend.towards];
  const between = (a: number, b: number): number => a + share * (b - a);
  return {
    second: between(from.second, to.second),
    limit: between(from.limit, to.limit),
    mismatch: between(from.mismatch, to.mismatch),
    mismatchLimit: between(from.mismatchLimit, to.mismatchLimit),
    nets: between(from.nets, to.nets),
    netsLimit: between(from.netsLimit, to.netsLimit),
    orientation: share < 0.5 ? from.orientation : to.orientation,
    plans: share < 0.5 ? from.plans : to.plans,
  };
}

/** What candidates that differ much are placed with, in turn: the emphases, then weights between them. */
export const recipes: readonly { readonly emphasis: Emphasis; readonly blend?: Blend }[] = [
  { emphasis: 'balanced' },
  { emphasis: 'gradient' },
  { emphasis: 'wiring' },
  { emphasis: 'dispersed' },
  { emphasis: 'balanced', blend: { towards: 'wiring', share: 0.4 } },
  { emphasis: 'balanced', blend: { towards: 'dispersed', share: 0.4 } },
  { emphasis: 'balanced', blend: { towards: 'wiring', share: 0.75 } },
  { emphasis: 'balanced', blend: { towards: 'dispersed', share: 0.75 } },
];

/** Where columns may hold so few nets that a free deal hardly ever fits, one that plans its columns comes first. */
const tightly: readonly ColumnPlan[] = [{ moment: 3, dispersion: 0 }, null];

/**
 * How a start deals; `kernel` is the correlation between columns, made only where a plan asks for it.
 * @param limited where the nets of a column are limited; `tight`: hardly a free deal keeps within.
 */
export function arrangementOf(
  { plans: own, netsLimit }: Weighing,
  start: number,
  chessboardNets: number,
  kernel: () => Dispersion['kernel'],
  limited?: { readonly limit: ColumnLimit; readonly tight: boolean },
): Arrangement {
  const plans = own === freely && limited?.tight === true ? tightly : own;
  const plan = plans[start % plans.length];
  if (plan === null) return 'scattered';
  return {
    columns: {
      momentPrice: plan.moment,
      ...(limited && { limit: limited.limit }),
      ...(plan.dispersion > 0 && {
        dispersion: {
          kernel: kernel(),
          price: plan.dispersion,
          netsLimit: netsLimit * chessboardNets,
        },
      }),
    },
  };
}

/** Where a plan has spread the nets evenly along their columns, a start cools from so little that it stays so. */
const KEEPS_THE_DEAL = 0.005;

/** What the cooling of a start begins at, over the mean change by an exchange. */
export const heatOf = ({ plans }: Weighing, start: number): number =>
  (plans[start % plans.length]?.dispersion ?? 0) > 0 ? KEEPS_THE_DEAL : 1;

/**
 * The work of one search. An accepted exchange costs the mismatch term a sweep over the whole core, so where it counts a large array gets
 * fewer trials.
 */
export function workOf(weighing: Weighing, work: Work, units: number): Work {
  if (weighing.mismatch === 0) {
    const { starts, workPerStart } = work;
    // How few nets there are is decided by the plan: many of them, and a shorter search after each.
    return weighing.nets > 0 ? { starts: 2 * starts, workPerStart: Math.ceil(workPerStart / 2) } : work;
  }
  const large = units > 2000;
  const share = large ? 1 / 2 : 1;
  // Different plans want a start each; without a plan a long start is worth more than several short ones.
  const starts = Math.ceil(work.starts / (large ? 2 : 1) / (weighing.plans.length > 1 ? 1 : 3));
  return { starts, workPerStart: Math.ceil((share * work.starts * work.workPerStart) / starts) };
}
