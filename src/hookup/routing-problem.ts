import type { Lengths, Stubs } from './track-order.js';

/** One column of a core as the router sees it. */
export interface Column {
  /** Nets with a unit here, ascending; sets of them are bit sets over this list. */
  readonly nets: readonly number[];
  /** Rows of each net's units, ascending from the top. */
  readonly rows: readonly (readonly number[])[];
  /** Row of the lowest fill dummy, which finds a free track last; -1 without one. */
  readonly fill: number;
}

export interface RoutingProblem {
  readonly rows: number;
  readonly columns: readonly Column[];
  /** Nets whose crossovers and lengths count: the bits. */
  readonly counted: readonly boolean[];
  readonly lengths: Lengths;
}

/** What is decided next of a split net: see `UnitSplitter`. */
type SplitStage = 'low' | 'first' | 'left-first' | 'right-first' | 'rest';

/** A net of a column with units on both sides: which are, and which are open still. */
export interface Split {
  /** Place in the column's list. */
  readonly at: number;
  readonly left: readonly number[];
  readonly right: readonly number[];
  readonly open: readonly number[];
  readonly stage: SplitStage;
}

/** All stubs from one column into one of its channels. */
export interface Bundle {
  /** Same number, same stubs, among those of this column and side. */
  readonly id: number;
  readonly stubs: readonly Stubs[];
}

/** How a column hooks up. */
export interface State {
  /** Nets with a unit on the left, and on the right: together all of the column, and both where a net is split. */
  readonly left: number;
  readonly right: number;
  readonly splits: readonly Split[];
  readonly intoLeft: Bundle;
  readonly intoRight: Bundle;
}

export const isDecided = (state: State): boolean => state.splits.every(({ open }) => open.length === 0);

/** Makes the states of a problem's columns; equal stubs are one object. */
export class StateMaker {
  readonly #problem: RoutingProblem;
  readonly #first: number[] = [];
  readonly #last: number[] = [];
  readonly #whole = new Map<string, Stubs>();
  readonly #bundles: Map<string, Bundle>[];

  constructor(problem: RoutingProblem) {
    this.#problem = problem;
    problem.columns.forEach(({ nets }, c) => {
      for (const net of nets) {
        this.#first[net] ??= c;
        this.#last[net] = c;
      }
    });
    this.#bundles = problem.columns.flatMap(() => [new Map<string, Bundle>(), new Map<string, Bundle>()]);
  }

  make(column: number, left: number, right: number, splits: readonly Split[]): State {
    return {
      left,
      right,
      splits,
      intoLeft: this.#bundle(column, 0, left, splits),
      intoRight: this.#bundle(column, 1, right, splits),
    };
  }

  #bundle(column: number, side: 0 | 1, present: number, splits: readonly Split[]): Bundle {
    const known = this.#bundles[2 * column + side];
    let whole = present;
    let key = '';
    for (const split of splits) {
      whole &= ~(1 << split.at);
      const rows = side === 0 ? split.left : split.right;
      if (rows.length > 0) key += `;${split.at}:${rows.join(',')}`;
    }
    key = `${whole}${key}`;
    const before = known.get(key);
    if (before !== undefined) return before;
    const { nets, rows } = this.#problem.columns[column];
    const stubs = nets.flatMap((net, at): Stubs[] => {
      if (((whole >> at) & 1) === 1) return [this.#wholeStubs(column, at, side)];
      const split = splits.find((each) => each.at === at);
      const list = (side === 0 ? split?.left : split?.right) ?? [];
      if (list.length === 0) return [];
      // Of a split net the left-hand trunk can be its first, the right-hand one its last.
      const ends = {
        opens: side === 0 && column === this.#first[net],
        closes: side === 1 && column === this.#last[net],
      };
      return [{ net, ...this.#counted(list.length === rows[at].length ? rows[at] : list), ...ends }];
    });
    const bundle = { id: known.size, stubs };
    known.set(key, bundle);
    return bundle;
  }

  #wholeStubs(column: number, at: number, side: 0 | 1): Stubs {
    const key = `${column},${at},${side}`;
    const before = this.#whole.get(key);
    if (before !== undefined) return before;
    const { nets, rows } = this.#problem.columns[column];
    const net = nets[at];
    const stubs = {
      net,
      ...this.#counted(rows[at]),
      opens: column === this.#first[net],
      closes: column === this.#last[net],
    };
    this.#whole.set(key, stubs);
    return stubs;
  }

  #counted(rows: readonly number[]): Pick<Stubs, 'first' | 'count' | 'fromRow'> {
    const fromRow = new Array<number>(this.#problem.rows + 2).fill(0);
    for (const row of rows) fromRow[row]++;
    for (let row = fromRow.length - 2; row >= 0; row--) fromRow[row] += fromRow[row + 1];
    return { first: rows[0], count: rows.length, fromRow };
  }
}
