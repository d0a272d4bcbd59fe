import type { RoutingProblem, Split, State, StateMaker } from './routing-problem.js';

const merged = (a: readonly number[], b: readonly number[]): number[] => [...a, ...b].sort((x, y) => x - y);

/**
 * Decides, step by step, on which side the units of a split net hook up. Some sequence of the steps leads to a best choice:
 *
 * - "low": units that lie below the net's topmost stub from the neighbouring columns, in both channels. They change no trunk's top. Units
 *   between which no other trunk begins in either channel cross the same trunks on either side and have the same stubs: all of such a
 *   block go to one side.
 * - "first": the side of the topmost unit of the others.
 * - "top": the topmost unit on the other side, if it raises that trunk's top; units above it keep to the first side.
 * - "rest": what is open then changes no top any more, and goes in blocks as the low units do.
 */
export class UnitSplitter {
  readonly #problem: RoutingProblem;
  readonly #maker: StateMaker;
  readonly #fewest: boolean;
  /** Nets of each column that some state splits. */
  readonly #split: readonly number[];
  readonly #begins = new Map<string, number[]>();

  /**
   * @param layers the states of every column that are still possible.
   * @param fewest whether the trunks are the fewest, so that none is there for the units of a split net alone.
   */
  constructor(problem: RoutingProblem, maker: StateMaker, layers: readonly (readonly State[])[], fewest: boolean) {
    this.#problem = problem;
    this.#maker = maker;
    this.#fewest = fewest;
    this.#split = layers.map((states) => states.reduce((set, state) => set | (state.left & state.right), 0));
  }

  /** The states that an undecided one is one of, after one step more. */
  refine(column: number, state: State): State[] {
    const i = state.splits.findIndex(({ open }) => open.length > 0);
    return this.#step(column, state.splits[i])
      .filter(({ left, right, open }) => open.length > 0 || (left.length > 0 && right.length > 0))
      .map((next) => this.#maker.make(column, state.left, state.right, state.splits.with(i, next)));
  }

  #step(column: number, split: Split): Split[] {
    const { left, right, open, stage } = split;
    switch (stage) {
      case 'low': {
        const net = this.#problem.columns[column].nets[split.at];
        const top = Math.max(this.#knownTop(column - 1, net, false), this.#knownTop(column + 1, net, true));
        const low = open.filter((row) => row >= top);
        if (low.length > 0) return this.#placeBlock(column, split, low);
        return this.#step(column, { ...split, stage: 'first' });
      }
      case 'first': {
        const [first, ...rest] = open;
        return [
          { ...split, left: merged([first], left), open: rest, stage: 'left-first' },
          { ...split, right: merged([first], right), open: rest, stage: 'right-first' },
        ];
      }
      case 'left-first':
      case 'right-first':
        return this.#chooseTop(column, split, stage === 'left-first');
      case 'rest':
        return this.#placeBlock(column, split, open);
    }
  }

  #chooseTop(column: number, split: Split, toRight: boolean): Split[] {
    const { left, right, open } = split;
    const net = this.#problem.columns[column].nets[split.at];
    const known = this.#knownTop(toRight ? column + 1 : column - 1, net, toRight);
    const above = open.filter((row) => row < known);
    const choice = (own: readonly number[], other: readonly number[], rest: readonly number[]): Split => ({
      ...split,
      left: merged(left, toRight ? own : other),
      right: merged(right, toRight ? other : own),
      open: rest,
      stage: 'rest',
    });
    return [
      ...above.map((row, i) => choice(above.slice(0, i), [row], open.slice(i + 1))),
      choice(above, [], open.slice(above.length)),
    ];
  }

  /** Units in rows above it raise the top of the net's trunk beyond a column: it is that of the neighbouring column's topmost unit. */
  #knownTop(column: number, net: number, toRight: boolean): number {
    const neighbour = this.#problem.columns[column] as RoutingProblem['columns'][number] | undefined;
    const at = neighbour?.nets.indexOf(net) ?? -1;
    if (!this.#fewest || neighbour === undefined || at === -1 || (this.#split[column] >> at) & 1) return Infinity;
    // Stubs of the left-hand column lie lower in their row than those of the right-hand one.
    return toRight ? neighbour.rows[at][0] : neighbour.rows[at][0] + 1;
  }

  /** The largest block among some open units on either side; and with all that is open, which may be as good as any. */
  #placeBlock(column: number, split: Split, among: readonly number[]): Split[] {
    const { left, right, open } = split;
    const block = this.#largestBlock(column, split.at, among);
    const rest = open.filter((row) => !block.includes(row));
    const parts: Split[] = [
      { ...split, left: merged(left, block), open: rest },
      { ...split, right: merged(right, block), open: rest },
    ];
    if (rest.length === 0) return parts;
    return [
      ...parts,
      { ...split, left: merged(left, open), open: [] },
      { ...split, right: merged(right, open), open: [] },
    ];
  }

  #largestBlock(column: number, at: number, rows: readonly number[]): number[] {
    const net = this.#problem.columns[column].nets[at];
    const fromLeft = this.#topsAbove(column, net);
    const fromRight = this.#topsAbove(column + 1, net);
    let largest: number[] = [];
    let block: number[] = [];
    for (const row of rows) {
      const last = block.at(-1);
      const same =
        last !== undefined &&
        fromLeft[2 * row] === fromLeft[2 * last] &&
        fromRight[2 * row + 1] === fromRight[2 * last + 1];
      if (!same) block = [];
      block.push(row);
      if (block.length > largest.length) largest = block;
    }
    return largest;
  }

  /** [height]: at how many lesser heights a trunk of another net may begin in a channel. */
  #topsAbove(channel: number, net: number): readonly number[] {
    const key = `${channel} ${net}`;
    const before = this.#begins.get(key);
    if (before !== undefined) return before;
    const { columns, rows } = this.#problem;
    const begins = new Array<number>(2 * rows + 4).fill(0);
    const mark = (column: number, offset: number) => {
      const neighbour = columns[column] as RoutingProblem['columns'][number] | undefined;
      neighbour?.nets.forEach((other, at) => {
        if (other === net) return;
        const any = (this.#split[column] >> at) & 1;
        for (const row of any ? neighbour.rows[at] : neighbour.rows[at].slice(0, 1)) begins[2 * row + offset] = 1;
      });
    };
    mark(channel - 1, 1);
    mark(channel, 0);
    let above = 0;
    const result = begins.map((begin) => (above += begin) - begin);
    this.#begins.set(key, result);
    return result;
  }
}
