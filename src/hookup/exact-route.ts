import { NEVER, popcount, type TrunkTable } from './fewest-trunks.js';
import { type Bundle, isDecided, type RoutingProblem, type State, StateMaker } from './routing-problem.js';
import { UnitSplitter } from './split-units.js';
import { ChannelSolver, EXACT_ORDER } from './track-order.js';

/** What a hookup is judged by, in this order. The wire length leaves out what all hookups on as many tracks have in common. */
export interface RouteCost {
  readonly trunks: number;
  readonly crossovers: number;
  /** Nanometres. */
  readonly length: number;
}

export interface Route {
  /** A state of every column, decided. */
  readonly states: readonly State[];
  /** Net on every track of every channel, -1 a free one. */
  readonly channels: readonly (readonly number[])[];
  readonly cost: RouteCost;
  /** No hookup on as many tracks comes before this. */
  readonly bound: RouteCost;
}

/** What all is weighed up to: states, pairs of sets in neighbouring columns, and steps of ordering tracks. Beyond, the best few of each column. */
const MOST_STATES = 60_000;
const MOST_PAIRS = 10_000_000;
const MOST_STEPS = 500_000_000;
const NARROW = 16;
const NARROW_STEPS = 2_000_000;

interface Edge {
  readonly cost: number;
  readonly full: number;
}

/**
 * States of a column that are alike to one of its channels. Their costs stand in slots: slot 2s + 1 if the column's fill dummies found no
 * free track on the left, 2s if they need none any more; s trunks more than the fewest so far.
 */
interface Side {
  readonly present: number;
  readonly bundle: Bundle;
  /** The least cost up to here and, after a sweep back, from here on. */
  readonly least: Float64Array;
  readonly rest: Float64Array;
  /** What the least comes from: a side before, or of a right-hand side a state, times slots, plus slot. */
  readonly from: Int32Array;
}

interface Layer {
  readonly states: readonly State[];
  readonly lefts: readonly Side[];
  readonly rights: readonly Side[];
  /** Of every state. */
  readonly leftOf: Int32Array;
  readonly rightOf: Int32Array;
}

interface Path {
  readonly cost: number;
  readonly states: readonly State[];
}

const empty: Bundle = { id: 0, stubs: [] };

/**
 * The best hookup on a given number of tracks with a given number of trunks more than the fewest: least crossovers, then least length.
 *
 * A dynamic programme over columns. A state says on which sides the units of a column hook up; a step prices the channel between two
 * columns by the best order of its tracks. At first every net hooks up on one side, or is split with all its units open: an open unit
 * costs nothing, so the sum is a bound. States that lead to nothing better than the best hookup known are dropped, those that are left
 * decide about some of their open units, and so on until the best is decided all through.
 */
export class ExactRoute {
  readonly #problem: RoutingProblem;
  readonly #table: TrunkTable;
  readonly #tracks: number;
  readonly #spare: number;
  readonly #slots: number;
  readonly #maker: StateMaker;
  readonly #solver: ChannelSolver;
  readonly #crossoverCost: number;
  readonly #edges: Map<number, Edge>[];
  #cut = false;
  #narrowed = false;

  /** @param table of at most as many tracks. */
  constructor(problem: RoutingProblem, table: TrunkTable, tracks: number, spare: number) {
    this.#problem = problem;
    this.#table = table;
    this.#tracks = tracks;
    this.#spare = spare;
    this.#slots = 2 * spare + 2;
    this.#maker = new StateMaker(problem);
    this.#crossoverCost = aboveAllLengths(problem, tracks);
    const { rows, lengths, counted } = problem;
    this.#solver = new ChannelSolver({ rows, tracks, lengths, counted, crossoverCost: this.#crossoverCost });
    this.#edges = Array.from({ length: problem.columns.length + 1 }, () => new Map<number, Edge>());
  }

  /** Whether hookups were left out for taking more trunks. */
  get cut(): boolean {
    return this.#cut;
  }

  /** Whether hookups were left out because there are too many. */
  get narrowed(): boolean {
    return this.#narrowed;
  }

  /** @returns null where the fill dummies find no free track. */
  solve(): Route | null {
    let layers = this.#enumerate();
    if (layers === null) {
      this.#narrowed = true;
      const path = this.#narrowPath();
      return path && this.#routeOf(path, -Infinity);
    }
    let best: Path | null = null;
    for (;;) {
      const decided = this.#sweep(layers.map((states) => states.filter(isDecided)));
      const path: Path | null = decided && this.#pathOf(decided);
      if (path && (best === null || path.cost < best.cost)) best = path;
      // To move all units of a split net to the side of its topmost one raises no top and takes no trunk: where no whole choice serves the
      // fill dummies, none does.
      if (best === null) return null;
      const all = this.#sweep(layers);
      if (all === null) return this.#routeOf(best, best.cost);
      const bound = all.at(-1)!.lefts[0].least.reduce((a, b) => Math.min(a, b));
      if (bound >= best.cost) return this.#routeOf(best, best.cost);
      this.#sweepBack(all);
      const incumbent = best.cost;
      const possible = all
        .slice(0, -1)
        .map((layer, c) => layer.states.filter((_, i) => this.#through(layer, i, c) < incumbent));
      const splitter = new UnitSplitter(this.#problem, this.#maker, possible, this.#spare === 0);
      layers = possible.map((states, c) =>
        states.flatMap((state) => (isDecided(state) ? [state] : splitter.refine(c, state))),
      );
      if (layers.reduce((sum, { length }) => sum + length, 0) > MOST_STATES) {
        this.#narrowed = true;
        return this.#routeOf(best, bound);
      }
    }
  }

  /** Every state that lies on a hookup with few enough trunks, split nets open; null if there are too many. */
  #enumerate(): State[][] | null {
    const { columns } = this.#problem;
    const layers: State[][] = [];
    let rights: readonly number[] = [0];
    let count = 0;
    let pairs = 0;
    let steps = 0;
    for (let c = 0; c < columns.length; c++) {
      pairs += rights.length << columns[c].nets.length;
      if (pairs > MOST_PAIRS) return null;
      const lefts = new Set<number>();
      steps += this.#join(c, rights, (left) => lefts.add(left));
      const states = [...lefts].flatMap((left) => this.#statesOf(c, left, true));
      count += states.length;
      if (count > MOST_STATES || steps > MOST_STEPS) return null;
      layers.push(states);
      rights = [...new Set(states.map(({ right }) => right))];
    }
    return layers;
  }

  /** All sets of a column that may hook left beside one of `rights`. @returns the steps that it takes to price all these channels. */
  #join(channel: number, rights: readonly number[], found: (left: number) => void, most = Infinity): number {
    const sets = 1 << this.#problem.columns[channel].nets.length;
    let steps = 0;
    for (const right of rights)
      for (let left = 0; left < sets && steps < most; left++) {
        if (this.#extra(channel, right, left) > this.#spare) continue;
        const here = this.#here(channel, right, left);
        steps += (this.#tracks * here) << here;
        found(left);
      }
    return steps;
  }

  /** Trunks of a channel. */
  #here(channel: number, right: number, left: number): number {
    const carried = channel === 0 ? 0 : this.#table.carry[channel - 1][right];
    return popcount(right) + popcount(left & ~carried);
  }

  /** Trunks of a channel and right of it beyond the fewest that are possible after `right`. Over `#spare`: not to be had. */
  #extra(channel: number, right: number, left: number): number {
    const table = this.#table;
    const { columns } = this.#problem;
    const here = this.#here(channel, right, left);
    if (here > table.tracks) return NEVER;
    if (here > EXACT_ORDER) {
      this.#narrowed = true;
      return NEVER;
    }
    const fewest = channel === 0 ? table.trunks : table.after[channel - 1][right];
    const whole = channel < columns.length ? (1 << columns[channel].nets.length) - 1 : 0;
    const beyond = channel < columns.length ? table.after[channel][whole & ~left] : 0;
    const extra = beyond === NEVER ? NEVER : here + beyond - fewest;
    if (extra > this.#spare && extra < NEVER) this.#cut = true;
    return extra;
  }

  #statesOf(column: number, left: number, split: boolean): State[] {
    const { nets, rows } = this.#problem.columns[column];
    const after = this.#table.after[column];
    const whole = (1 << nets.length) - 1;
    const rest = whole & ~left;
    const states = [this.#maker.make(column, left, rest, [])];
    if (!split) return states;
    const most = after[rest] + this.#spare;
    let both = 0;
    for (let at = 0; at < nets.length; at++)
      if ((left >> at) & 1 && rows[at].length > 1) {
        if (after[rest | (1 << at)] <= most) both |= 1 << at;
        else if (after[rest | (1 << at)] < NEVER) this.#cut = true;
      }
    for (let more = both; more !== 0; more = (more - 1) & both) {
      if (after[rest | more] > most) continue;
      const splits = nets.flatMap((_, at) =>
        (more >> at) & 1 ? [{ at, left: [], right: [], open: rows[at], stage: 'low' as const }] : [],
      );
      states.push(this.#maker.make(column, left, rest | more, splits));
    }
    return states;
  }

  #edge(channel: number, before: Side, after: Side): Edge {
    const known = this.#edges[channel];
    const key = before.bundle.id * 0x200000 + after.bundle.id;
    let edge = known.get(key);
    if (edge === undefined) {
      const cost = this.#solver.solve(before.bundle.stubs, after.bundle.stubs);
      edge = { cost, full: this.#solver.full };
      known.set(key, edge);
    }
    return edge;
  }

  #side(present: number, bundle: Bundle): Side {
    const costs = () => new Float64Array(this.#slots).fill(Infinity);
    return { present, bundle, least: costs(), rest: costs(), from: new Int32Array(this.#slots) };
  }

  /**
   * The slots that a channel leads to. A fill dummy is served by a channel some track of which is free beside it, and the lowest of a
   * column needs the most.
   */
  #steps(channel: number, before: Side, after: Side, step: (from: number, to: number, cost: number) => void): void {
    const extra = this.#extra(channel, before.present, after.present);
    if (extra > this.#spare) return;
    const { cost, full } = this.#edge(channel, before, after);
    const { columns } = this.#problem;
    const ofLeft = channel > 0 ? columns[channel - 1].fill : -1;
    const ofRight = channel < columns.length ? columns[channel].fill : -1;
    const servesLeft = 2 * ofLeft + 1 < full;
    const owes = ofRight >= 0 && 2 * ofRight >= full ? 1 : 0;
    for (let slot = 0; slot + 2 * extra < this.#slots; slot++)
      if (slot % 2 === 0 || servesLeft) step(slot, slot - (slot % 2) + 2 * extra + owes, cost);
  }

  /** Prices the states of a column, or the end of the core, after the sides before. */
  #advance(channel: number, before: readonly Side[], states: readonly State[]): Layer {
    const sides = (of: (state: State) => readonly [present: number, bundle: Bundle]) => {
      const known = new Map<string, number>();
      const list: Side[] = [];
      const which = Int32Array.from(states, (state) => {
        const [present, bundle] = of(state);
        const key = `${present} ${bundle.id}`;
        const at = known.get(key) ?? list.push(this.#side(present, bundle)) - 1;
        known.set(key, at);
        return at;
      });
      return [list, which] as const;
    };
    const end = channel === this.#problem.columns.length;
    const [lefts, leftOf] = end
      ? [[this.#side(0, empty)], new Int32Array(0)]
      : sides((state) => [state.left, state.intoLeft]);
    const [rights, rightOf] = sides((state) => [state.right, state.intoRight]);
    lefts.forEach((after) => {
      before.forEach((side, i) => {
        this.#steps(channel, side, after, (from, to, cost) => {
          const value = side.least[from] + cost;
          if (value >= after.least[to]) return;
          after.least[to] = value;
          after.from[to] = i * this.#slots + from;
        });
      });
    });
    states.forEach((state, i) => {
      const left = lefts[leftOf[i]];
      const right = rights[rightOf[i]];
      const lift = this.#lift(channel, state);
      for (let slot = 0; slot + lift < this.#slots; slot++) {
        if (left.least[slot] >= right.least[slot + lift]) continue;
        right.least[slot + lift] = left.least[slot];
        right.from[slot + lift] = i * this.#slots + slot;
      }
    });
    return { states, lefts, rights, leftOf, rightOf };
  }

  /** By how many slots the trunks of split nets lift a state. */
  #lift(column: number, { left, right }: State): number {
    const whole = (1 << this.#problem.columns[column].nets.length) - 1;
    const after = this.#table.after[column];
    return 2 * (after[right] - after[whole & ~left]);
  }

  #start(): Side[] {
    const start = this.#side(0, empty);
    start.least[0] = 0;
    return [start];
  }

  /** The layers of all columns and one for the end; null where no states go together. */
  #sweep(states: readonly (readonly State[])[]): Layer[] | null {
    const layers: Layer[] = [];
    let before = this.#start();
    for (const [c, list] of [...states, []].entries()) {
      const layer = this.#advance(c, before, list);
      if (!layer.lefts.some(({ least }) => least.some((value) => value < Infinity))) return null;
      layers.push(layer);
      before = [...layer.rights];
    }
    return layers;
  }

  #sweepBack(layers: readonly Layer[]): void {
    layers.at(-1)!.lefts[0].rest.fill(0);
    for (let c = layers.length - 1; c > 0; c--) {
      const layer = layers[c - 1];
      for (const side of layer.rights)
        for (const after of layers[c].lefts)
          this.#steps(c, side, after, (from, to, cost) => {
            side.rest[from] = Math.min(side.rest[from], cost + after.rest[to]);
          });
      layer.states.forEach((state, i) => {
        const { rest } = layer.lefts[layer.leftOf[i]];
        const right = layer.rights[layer.rightOf[i]];
        const lift = this.#lift(c - 1, state);
        for (let slot = 0; slot + lift < this.#slots; slot++)
          rest[slot] = Math.min(rest[slot], right.rest[slot + lift]);
      });
    }
  }

  /** The least cost of a whole hookup with this state; `c` is its column. */
  #through(layer: Layer, i: number, c: number): number {
    const { least } = layer.lefts[layer.leftOf[i]];
    const { rest } = layer.rights[layer.rightOf[i]];
    const lift = this.#lift(c, layer.states[i]);
    let value = Infinity;
    for (let slot = 0; slot + lift < this.#slots; slot++) value = Math.min(value, least[slot] + rest[slot + lift]);
    return value;
  }

  #pathOf(layers: readonly Layer[]): Path {
    const { least, from } = layers.at(-1)!.lefts[0];
    const slot = least.indexOf(least.reduce((a, b) => Math.min(a, b)));
    const states: State[] = [];
    let at = from[slot];
    for (let c = layers.length - 2; c >= 0; c--) {
      const { states: choices, lefts, rights, leftOf } = layers[c];
      const place = rights[Math.floor(at / this.#slots)].from[at % this.#slots];
      const i = Math.floor(place / this.#slots);
      states.unshift(choices[i]);
      at = lefts[leftOf[i]].from[place % this.#slots];
    }
    return { cost: least[slot], states };
  }

  /** A sweep over the best few whole choices of each column. */
  #narrowPath(): Path | null {
    const layers: Layer[] = [];
    let before: readonly Side[] = this.#start();
    const ofBest = ({ least }: Side) => least.reduce((a, b) => Math.min(a, b));
    for (let c = 0; c < this.#problem.columns.length; c++) {
      const lefts = new Set<number>();
      const rights = before.map(({ present }) => present);
      this.#join(c, rights, (left) => lefts.add(left), NARROW_STEPS);
      const layer = this.#advance(
        c,
        before,
        [...lefts].flatMap((left) => this.#statesOf(c, left, false)),
      );
      before = layer.rights
        .filter((side) => ofBest(side) < Infinity)
        .sort((a, b) => ofBest(a) - ofBest(b))
        .slice(0, NARROW);
      if (before.length === 0) return null;
      layers.push({ ...layer, rights: before });
    }
    const end = this.#advance(layers.length, before, []);
    return ofBest(end.lefts[0]) < Infinity ? this.#pathOf([...layers, end]) : null;
  }

  #routeOf({ states, cost }: Path, bound: number): Route {
    const channels = Array.from({ length: states.length + 1 }, (_, c) =>
      this.#solver.order(states[c - 1]?.intoRight.stubs ?? [], states[c]?.intoLeft.stubs ?? []),
    );
    const trunks = channels.flat().filter((net) => net !== -1).length;
    const fewest = this.#table.trunks + this.#spare;
    return { states, channels, cost: this.#costOf(cost, trunks), bound: this.#costOf(bound, Math.min(trunks, fewest)) };
  }

  #costOf(cost: number, trunks: number): RouteCost {
    if (cost === -Infinity) return { trunks, crossovers: 0, length: -Infinity };
    const crossovers = Math.round(cost / this.#crossoverCost);
    return { trunks, crossovers, length: cost - crossovers * this.#crossoverCost };
  }
}

/** More than twice the length that a hookup could possibly have, either way: a length never outweighs a crossover. */
function aboveAllLengths({ rows, columns, lengths }: RoutingProblem, tracks: number): number {
  let pairs = 0;
  let units = 0;
  for (const column of columns) {
    pairs += column.nets.length;
    for (const list of column.rows) units += list.length;
  }
  const across = lengths.reach + tracks * lengths.track;
  return 4 * (units * across + 2 * pairs * ((rows + 1) * lengths.row + lengths.level) + 2 * pairs * across + 1);
}
