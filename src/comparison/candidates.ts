import { figure } from '../core/figure.js';
import type { Resumable } from '../placement/resumable.js';
import type { StartResult } from '../placement/search.js';
import type { Floorplan } from '../spec/floorplan.js';
import type { Metrics } from '../spec/metrics.js';
import { compare } from './compare.js';
import { isBetter } from './dominance.js';
import { comparedFigures, figuresOf } from './figures.js';
import type { ComparedFigures } from './figures.js';

/** A placement with its figures. `Kept` is whatever its drawing needs. */
export interface Measured<Kept> {
  readonly kept: Kept;
  readonly floorplan: Floorplan;
  readonly metrics: Metrics;
}

interface Single<Job, Kept> extends Resumable<Job> {
  best(interrupted: boolean): Kept;
}

/** How the candidates come about, one by one: their numbers are all that is told of them here. */
export interface CandidateSource<Job, Kept> {
  begin(number: number): Single<Job, Kept>;
  measure(kept: Kept): Measured<Kept>;
}

const MOST_ROUNDS = 3;
/** The emphases, which differ most. */
const FEWEST_AT_ONCE = 4;

/**
 * A search of several floorplans, none of them dominated by another: as many as are asked for are placed, four at least, and measured;
 * if too few of them hold their own, as many again, three times in all. The result depends on the source and the number alone.
 */
export class Candidates<Job, Kept> implements Resumable<Job & { readonly candidate: number }> {
  readonly #source: CandidateSource<Job, Kept>;
  readonly #count: number;
  readonly #runs: Single<Job, Kept>[] = [];
  /** Measured so far, in the order of their numbers: those of a round are when the whole round is over. */
  #measured: Measured<Kept>[] = [];
  #best: readonly Measured<Kept>[] = [];
  #fresh = new Map<number, Measured<Kept>>();

  constructor(count: number, source: CandidateSource<Job, Kept>) {
    this.#count = count;
    this.#source = source;
    this.#begin();
  }

  get over(): boolean {
    const all = this.#measured.length === this.#runs.length;
    return all && (this.#best.length >= this.#count || this.#runs.length >= MOST_ROUNDS * this.#atOnce);
  }

  get waiting(): boolean {
    return !this.over && this.#open().every(([, run]) => !run.over && run.waiting);
  }

  get progress(): number {
    const done = this.#runs.reduce((sum, run) => sum + run.progress, 0);
    return this.over ? 1 : Math.min(0.99, done / this.#runs.length);
  }

  get work(): number {
    return this.#runs.reduce((sum, run) => sum + run.work, 0);
  }

  step(work: number): boolean {
    const ended = this.#open().find(([, run]) => run.over);
    if (ended) this.#measure(...ended);
    else
      this.#open()
        .find(([, run]) => !run.waiting)?.[1]
        .step(work);
    return !this.over;
  }

  take(): (Job & { readonly candidate: number }) | undefined {
    for (const [candidate, run] of this.#open()) {
      const job = run.take();
      if (job !== undefined) return { ...job, candidate };
    }
    return undefined;
  }

  offer(job: Job & { readonly candidate: number }, result: StartResult, done: boolean): boolean {
    return this.#runs[job.candidate].offer(job, result, done);
  }

  /** Those that none dominates, in the order of their second order; before there is one, the first run's best so far. */
  best(): readonly Kept[] {
    if (this.#measured.length + this.#fresh.size === 0) return [this.#runs[0].best(true)];
    const all = [...this.#measured, ...this.#fresh.values()];
    return (this.#fresh.size === 0 ? this.#best : undominated(all, this.#count)).map(({ kept }) => kept);
  }

  get #atOnce(): number {
    return Math.max(FEWEST_AT_ONCE, this.#count);
  }

  /** Of this round, those that are not measured yet. */
  #open(): [number, Single<Job, Kept>][] {
    return [...this.#runs.entries()].filter(([i]) => i >= this.#measured.length && !this.#fresh.has(i));
  }

  #begin(): void {
    for (let i = 0; i < this.#atOnce; i++) this.#runs.push(this.#source.begin(this.#runs.length));
  }

  #measure(number: number, run: Single<Job, Kept>): void {
    this.#fresh.set(number, this.#source.measure(run.best(false)));
    if (this.#open().length > 0) return;
    const round = [...this.#fresh].sort(([a], [b]) => a - b).map(([, measured]) => measured);
    this.#measured = [...this.#measured, ...round];
    this.#fresh = new Map();
    this.#best = undominated(this.#measured, this.#count);
    if (!this.over) this.#begin();
  }
}

const deciding = comparedFigures.filter(({ decides }) => decides);

/**
 * At most `count` placements, none dominated by another: neither by their metrics, each on the pitch that it is drawn on, nor when they are
 * compared on the pitch of the first. Of more than `count` those that lie farthest apart. In the order of their second order.
 */
export function undominated<Kept>(all: readonly Measured<Kept>[], count: number): readonly Measured<Kept>[] {
  const figures = new Map(all.map((each) => [each, figuresOf(each.metrics, each.metrics.name)]));
  const of = (each: Measured<Kept>): ComparedFigures => figures.get(each)!;
  const isTwin = (a: Measured<Kept>, b: Measured<Kept>): boolean =>
    deciding.every((each) => figure(each.of(of(a)) ?? 0) === figure(each.of(of(b)) ?? 0));
  const single = all.filter((each, i) => !all.slice(0, i).some((former) => isTwin(former, each)));
  let left = single.filter((each) => !single.some((other) => isBetter(of(other), of(each))));
  for (;;) {
    const few = [...farApart(left, count, of)].sort((a, b) => secondOrder(a) - secondOrder(b));
    const drawn = few.map(({ floorplan, metrics }) => ({ floorplan, drawn: metrics }));
    const compared = ([undefined, 'own'] as const).map((pitch) => compare(drawn, pitch && { pitch }));
    // One order at a time: of that some are left, whatever the other says.
    const found = compared.find(({ dominates }) => dominates.length > 0);
    if (found === undefined) return few;
    const worse = new Set(found.dominates.map(([, name]) => name));
    left = left.filter((each) => !worse.has(found.floorplans[few.indexOf(each)]?.name));
  }
}

const secondOrder = ({ metrics }: Measured<unknown>): number => metrics.gradient.second.inl_lsb_per_ppm_per_um2;

/** The best of each figure, then again and again the one that differs most from all that are chosen, figures as shares of their range. */
function farApart<T>(all: readonly T[], count: number, of: (each: T) => ComparedFigures): readonly T[] {
  if (all.length <= count) return all;
  const axes = deciding.map((axis) => {
    const values = all.map((each) => axis.of(of(each)) ?? 0);
    const least = Math.min(...values);
    const range = Math.max(...values) - least || 1;
    return values.map((value) => (value - least) / range);
  });
  const chosen = new Set<number>();
  for (const axis of axes) if (axis.some((value) => value > 0) && chosen.size < count) chosen.add(axis.indexOf(0));
  const apart = (i: number, j: number): number => axes.reduce((sum, axis) => sum + Math.abs(axis[i] - axis[j]), 0);
  while (chosen.size < count) {
    const distances = all.map((_, i) => Math.min(...[...chosen].map((j) => apart(i, j))));
    chosen.add(distances.indexOf(Math.max(...distances)));
  }
  return [...chosen].map((i) => all[i]);
}
