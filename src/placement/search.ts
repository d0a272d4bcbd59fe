import type { Deal } from '../array/cost-term.js';
import { Random } from '../core/random.js';
import type { WeightedTerm } from './annealing.js';
import { AnnealedStart } from './annealing.js';
import type { Dealing } from './dealing.js';
import { netsOfCells } from './dealing.js';

export interface SearchOptions {
  /** The deal of a numbered start. The search owns what it gets. */
  readonly deals: (start: number) => Dealing;
  /** What a deal costs: the sum of weight * term. */
  readonly terms: (deal: Deal) => readonly WeightedTerm[];
  readonly starts: number;
  /** Trial exchanges of each start. */
  readonly workPerStart: number;
  readonly seed: number;
  /** What the cooling of a numbered start begins at, over the mean change by an exchange; 1 if not given. */
  readonly heat?: (start: number) => number;
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

/** What a start has come to: plain data. */
export interface StartResult {
  readonly start: number;
  readonly cost: number;
  readonly dealing: Dealing;
  readonly netOfBlock: Uint8Array;
  /** Trial exchanges that it took. */
  readonly work: number;
}

/** One numbered start of a search, resumable. */
export class SearchStart {
  readonly #start: number;
  readonly #run: AnnealedStart;
  #work = 0;

  constructor(options: Omit<SearchOptions, 'starts' | 'stopWhen'>, start: number) {
    const { deals, terms, workPerStart, seed, heat } = options;
    const dealing = deals(start);
    this.#start = start;
    // Streams from -1 down: those from 0 up are left to whoever deals the numbered starts from the same seed.
    this.#run = new AnnealedStart(
      dealing,
      terms(dealing.deal),
      workPerStart,
      new Random(seed, -1 - start),
      heat?.(start),
    );
  }

  get done(): boolean {
    return this.#run.done;
  }

  get progress(): number {
    return this.#run.progress;
  }

  /** Trial exchanges so far. */
  get work(): number {
    return this.#work;
  }

  /** Runs at most `work` trials, a whole number of at least 1. @returns how many. */
  step(work: number): number {
    const ran = this.#run.step(work);
    this.#work += ran;
    return ran;
  }

  /** The best so far; there is one from the beginning. */
  result(): StartResult {
    return { start: this.#start, dealing: this.#run.dealing, ...this.#run.best(), work: this.#work };
  }
}

/**
 * A resumable search among the exchanges of a deal's blocks: numbered starts, each annealed; the result is the least by (cost, start
 * number). It depends on the options alone, neither on how the work is cut into steps nor on when `best` is asked.
 *
 * Starts may also be taken and run elsewhere. They are settled in the order of their numbers, whoever ran them and whenever they came:
 *
 *     0 settled | 1 settled | 2 taken | 3 own | 4 back, waits for 2 | 5 free
 *
 * so that a start which ends the search ends it for those of higher numbers only, and what these have done by then counts for nothing:
 * neither placement nor work depends on how many ran side by side.
 */
export class Search {
  readonly #options: SearchOptions;
  /** Begun here or taken: the starts below this. */
  #next = 0;
  #settled = 0;
  #own: { readonly start: number; readonly run: SearchStart } | undefined;
  /** Of starts from `#settled` up: those that are back, and the last that was heard of others. */
  readonly #back = new Map<number, StartResult>();
  readonly #heard = new Map<number, StartResult>();
  #kept: StartResult | undefined;
  #status: SearchStatus = 'running';
  #work = 0;

  /** @throws RangeError without a start. */
  constructor(options: SearchOptions) {
    if (!(options.starts >= 1)) throw new RangeError('a search has at least one start');
    this.#options = options;
  }

  get starts(): number {
    return this.#options.starts;
  }

  get status(): SearchStatus {
    return this.#status;
  }

  /** Whether what is left to do is all in other hands. */
  get waiting(): boolean {
    return this.#status === 'running' && !this.#own && this.#next === this.#options.starts;
  }

  /** Share of the work that is done here or is back, 0 to 1. */
  get progress(): number {
    if (this.#status !== 'running') return 1;
    return (this.#settled + this.#back.size + (this.#own?.run.progress ?? 0)) / this.#options.starts;
  }

  /** Trial exchanges so far; of an ended search those of the starts that were settled. */
  get work(): number {
    if (this.#status !== 'running') return this.#work;
    const elsewhere = [...this.#back.values(), ...this.#heard.values()];
    return elsewhere.reduce((sum, { work }) => sum + work, this.#work + (this.#own?.run.work ?? 0));
  }

  /** Runs some `work` trial exchanges, at least one where there is one to run. @returns whether there is more to do, here or elsewhere. */
  step(work: number): boolean {
    let left = Math.max(1, Math.floor(work));
    while (this.#status === 'running' && left > 0 && this.#begin()) {
      const { start, run } = this.#own!;
      if (!run.done) left -= run.step(left);
      if (run.done) {
        this.#own = undefined;
        this.#settle(start, run.result());
      }
    }
    return this.#status === 'running';
  }

  /** Leaves a start to somebody else. @returns its number, undefined where none is left. */
  take(): number | undefined {
    return this.#status === 'running' && this.#next < this.#options.starts ? this.#next++ : undefined;
  }

  /** What a start that was taken has come to: at its end, or (`done` false) so far. Of no effect where it does not matter any more. */
  offer(result: StartResult, done: boolean): void {
    if (this.#status !== 'running' || result.start < this.#settled) return;
    if (done) this.#settle(result.start, result);
    else this.#heard.set(result.start, result);
  }

  /** The best so far; there is one from the beginning. */
  best(): Best {
    const open = this.#open();
    if (!this.#kept && open.length === 0) {
      if (!this.#begin()) throw new Error('nothing was heard yet of the starts that were taken');
      return this.best();
    }
    return bestOf([...(this.#kept ? [this.#kept] : []), ...open].reduce(lesser));
  }

  /** Of the starts that are not settled, what is known. */
  #open(): StartResult[] {
    if (this.#status !== 'running') return [];
    return [...this.#back.values(), ...this.#heard.values(), ...(this.#own ? [this.#own.run.result()] : [])];
  }

  /** Sees to it that a start runs here. @returns false where none is left. */
  #begin(): boolean {
    if (this.#own) return true;
    const start = this.take();
    if (start === undefined) return false;
    this.#own = { start, run: new SearchStart(this.#options, start) };
    return true;
  }

  #settle(start: number, result: StartResult): void {
    this.#heard.delete(start);
    this.#back.set(start, result);
    const { starts, stopWhen } = this.#options;
    for (let next; this.#status === 'running' && (next = this.#back.get(this.#settled));) {
      this.#back.delete(this.#settled);
      this.#work += next.work;
      this.#kept = this.#kept ? lesser(this.#kept, next) : next;
      if (this.#kept.cost === 0 || stopWhen?.(bestOf(this.#kept))) this.#status = 'stopped';
      else if (++this.#settled === starts) this.#status = 'effort-spent';
    }
  }
}

const lesser = (a: StartResult, b: StartResult): StartResult =>
  a.cost < b.cost || (a.cost === b.cost && a.start < b.start) ? a : b;

function bestOf({ start, cost, dealing, netOfBlock }: StartResult): Best {
  // The start's own deal moves on; this one stays.
  const still = { ...dealing, deal: { ...dealing.deal, netOfBlock } };
  return { start, cost, dealing: still, netOfCell: netsOfCells(dealing, netOfBlock) };
}
