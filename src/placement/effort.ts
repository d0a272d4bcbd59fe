import type { Effort } from '../spec/array-spec.js';

export interface Work {
  readonly starts: number;
  /** Trial exchanges of a start. */
  readonly workPerStart: number;
}

const EFFORTS: Readonly<Record<Effort, Work & { readonly perUnit: number }>> = {
  quick: { starts: 1, workPerStart: 200_000, perUnit: 200 },
  normal: { starts: 2, workPerStart: 1_000_000, perUnit: 1000 },
  thorough: { starts: 8, workPerStart: 4_000_000, perUnit: 4000 },
};

/** How much a search does on one core: a count of work, not of seconds, so that every machine finds the same. */
export function workFor(effort: Effort, units: number): Work {
  const { starts, workPerStart, perUnit } = EFFORTS[effort];
  return { starts, workPerStart: workPerStart + perUnit * units };
}
