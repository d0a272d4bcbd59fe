import type { ProvingSearch } from './proving-search.js';
import { Search, type StartResult } from './search.js';

/** A search in a round. */
export interface Sought {
  readonly search: Search | ProvingSearch;
  /** What it is after: what the run wants, or an answer that a later round needs. */
  readonly weights: 'own' | 'second-order';
  /** Of the whole run's work. */
  readonly share: number;
}

/** A start of one of the searches, left to somebody else. */
export interface TakenStart<S extends Sought> {
  readonly stage: S;
  readonly start: number;
  /** Of the search. */
  readonly starts: number;
  /** Which search of the run it is of. */
  readonly number: number;
}

const isWaiting = ({ search }: Sought): boolean => search instanceof Search && search.waiting;

/**
 * Rounds of searches, one round after the other; the searches of a round do not need each other. What the next round is, the generator
 * decides from what the former ones have found; what it returns is the search whose best the run ends with.
 */
export class Rounds<S extends Sought> {
  readonly #rounds: Generator<readonly S[], S, void>;
  #round: readonly S[] = [];
  /** Those of the round that are over. */
  readonly #over = new Set<S>();
  /** The searches of former rounds: how many, and the one to fall back on. */
  #before = 0;
  #former: S | undefined;
  #result: S | undefined;
  #workBefore = 0;
  #shareBefore = 0;

  constructor(rounds: Generator<readonly S[], S, void>) {
    this.#rounds = rounds;
    this.#begin();
  }

  get started(): boolean {
    return this.#result !== undefined || this.work > 0;
  }

  get over(): boolean {
    return this.#result !== undefined;
  }

  /** Whether what is left to do now is all in other hands. */
  get waiting(): boolean {
    return !this.#result && this.#round.every((stage) => this.#over.has(stage) || isWaiting(stage));
  }

  /** 0 to 1. */
  get progress(): number {
    if (this.#result) return 1;
    const share = this.#round.reduce((sum, stage) => sum + stage.share * stage.search.progress, this.#shareBefore);
    return Math.min(0.99, share);
  }

  /** Trial exchanges so far. */
  get work(): number {
    return this.#round.reduce((sum, { search }) => sum + search.work, this.#workBefore);
  }

  /** Runs some `work` trial exchanges. @returns whether there is more to do, here or elsewhere. */
  step(work: number): boolean {
    const stage = this.#round.find((each) => !this.#over.has(each) && !isWaiting(each));
    if (stage && !stage.search.step(work)) this.#end(stage);
    return !this.over;
  }

  take(): TakenStart<S> | undefined {
    for (const [i, stage] of this.#round.entries()) {
      if (!(stage.search instanceof Search)) continue;
      const start = stage.search.take();
      if (start !== undefined) return { stage, start, starts: stage.search.starts, number: this.#before + i };
    }
    return undefined;
  }

  /** What a taken start has come to. @returns false where that does not matter any more. */
  offer(number: number, result: StartResult, done: boolean): boolean {
    const stage = this.#round[number - this.#before];
    if (!(stage?.search instanceof Search) || this.#over.has(stage)) return false;
    stage.search.offer(result, done);
    if (stage.search.status !== 'running') this.#end(stage);
    return true;
  }

  /** The one whose best the run would end with now: a search with the run's own weights first, of several that of least cost. */
  best(): S {
    if (this.#result) return this.#result;
    const costOf = ({ search }: S) => (search instanceof Search ? search.best().cost : -1);
    const lesser = (a: S, b: S): S => {
      if (a.weights !== b.weights) return a.weights === 'own' ? a : b;
      return costOf(b) <= costOf(a) ? b : a;
    };
    const worked = this.#round.filter(({ search }) => search.work > 0);
    return [...(this.#former ? [this.#former] : []), ...worked].reduce(lesser, this.#former ?? this.#round[0]);
  }

  #end(stage: S): void {
    this.#over.add(stage);
    if (this.#over.size < this.#round.length) return;
    this.#workBefore = this.work;
    this.#before += this.#round.length;
    this.#former = this.best();
    for (const { share } of this.#round) this.#shareBefore += share;
    this.#begin();
  }

  #begin(): void {
    const next = this.#rounds.next();
    this.#over.clear();
    this.#round = next.done ? [] : next.value;
    if (next.done) this.#result = next.value;
  }
}
