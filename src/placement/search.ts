import type { Deal } from '../array/cost-term.js';
import { Random } from '../core/random.js';
import type { WeightedTerm } from './annealing.js';
import { AnnealedStart } from './annealing.js';
import type { Dealing } from './dealing.js';
import { netsOfCells } from './dealing.js';

export interface SearchOptions {
  /** The deal of a numbered start; asked once for each, in order. The search owns what it gets. */
  readonly deals: (start: number) => Dealing;
  /** What a deal costs: the sum of weight * term. */
  readonly terms: (deal: Deal) => readonly WeightedTerm[];
  readonly starts: number;
  /** Trial exchanges of each start. */
  readonly workPerStart: number;
  readonly seed: number;
  /** Asked after each start about the best so far; true (no better one exists) leaves out the starts of higher numbers. */
  readonly stopWhen?: (best: Best) => boolean;
}

export interface Best {
  readonly start: number;
  readonly cost: number;
  /** The start's deal, with the nets as they are in the best of it. */
  readonly dealing: Dealing;
  /** Net of every cell, row by row from the top. */
  readonly netOfCell: Uint8Array;
}

/** "stopped": `stopWhen` was content, or the cost is 0, which nothing undercuts. */
export type SearchStatus = 'running' | 'effort-spent' | 'stopped';

interface Kept {
  readonly start: number;
  readonly cost: number;
  readonly dealing: Dealing;
  readonly netOfBlock: Uint8Array;
}

/**
 * A resumable search among the exchanges of a deal's blocks: starts one after the other, each annealed; the result is the least by (cost,
 * start number). It depends on the options alone, neither on how the work is cut into steps nor on when `best` is asked.
 */
export class Search {
  readonly #options: SearchOptions;
  #number = 0;
  #run: AnnealedStart | undefined;
  #kept: Kept | undefined;
  #status: SearchStatus = 'running';
  #work = 0;

  /** @throws RangeError without a start. */
  constructor(options: SearchOptions) {
    if (!(options.starts >= 1)) throw new RangeError('a search has at least one start');
    this.#options = options;
    this.#run = this.#begin();
    // A deal without anything to exchange is done before its first trial.
    this.#settle();
  }

  get status(): SearchStatus {
    return this.#status;
  }

  /** Share of the work that is done, 0 to 1. */
  get progress(): number {
    return this.#status === 'running' ? (this.#number + (this.#run?.progress ?? 0)) / this.#options.starts : 1;
  }

  /** Trial exchanges so far. */
  get work(): number {
    return this.#work;
  }

  /** Runs some `work` trial exchanges, at least one. @returns whether there is more to do. */
  step(work: number): boolean {
    let left = Math.max(1, Math.floor(work));
    while (this.#run && left > 0) {
      const ran = this.#run.step(left);
      left -= ran;
      this.#work += ran;
      this.#settle();
    }
    return this.#status === 'running';
  }

  /** The best so far; there is one from the beginning. */
  best(): Best {
    const { start, cost, dealing, netOfBlock } = this.#least();
    // The start's own deal moves on; this one stays.
    const still = { ...dealing, deal: { ...dealing.deal, netOfBlock } };
    return { start, cost, dealing: still, netOfCell: netsOfCells(dealing, netOfBlock) };
  }

  #begin(): AnnealedStart {
    const { deals, terms, workPerStart, seed } = this.#options;
    const dealing = deals(this.#number);
    // Streams from -1 down: those from 0 up are left to whoever deals the numbered starts from the same seed.
    return new AnnealedStart(dealing, terms(dealing.deal), workPerStart, new Random(seed, -1 - this.#number));
  }

  /** Of equal costs the one of the lower number, so what is kept of earlier starts goes first. */
  #least(): Kept {
    if (!this.#run) return this.#kept as Kept;
    const now = this.#run.best();
    if (this.#kept && this.#kept.cost <= now.cost) return this.#kept;
    return { start: this.#number, dealing: this.#run.dealing, ...now };
  }

  #settle(): void {
    while (this.#run?.done) {
      this.#kept = this.#least();
      this.#run = undefined;
      if (this.#kept.cost === 0 || this.#options.stopWhen?.(this.best())) this.#status = 'stopped';
      else if (++this.#number === this.#options.starts) this.#status = 'effort-spent';
      else this.#run = this.#begin();
    }
  }
}
