import type { Effort } from '../spec/array-spec.js';

export interface Work {
  readonly starts: number;
  /** Trial exchanges of a start. */
  readonly workPerStart: number;
}

const EFFORTS: Readonly<Record<Effort, Work & { readonly perUnit: number }>> = {
  quick: { starts: 1, workPerStart: 100_000, perUnit: 60 },
  normal: { starts: 3, workPerStart: 400_000, perUnit: 300 },
  thorough: { starts: 12, workPerStart: 2_000_000, perUnit: 500 },
};

const SMALL = 150;

/** How much a search does on one core: a count of work, not of seconds, so that every machine finds the same. */
export function workFor(effort: Effort, units: number): Work {
  const { starts, workPerStart, perUnit } = EFFORTS[effort];
  const work = workPerStart + perUnit * units;
  // A small array is soon cold, and where a start ends depends on how it began: many short ones.
  return units < SMALL ? { starts: 3 * starts, workPerStart: Math.ceil(work / 3) } : { starts, workPerStart: work };
}
