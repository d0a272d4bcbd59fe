/**
 * The order of the nets on the tracks of one channel, exactly: fewest crossovers, then least wire length, by a dynamic programme over
 * subsets of its nets.
 *
 * Heights are counted downwards: the stub of a unit in row r lies at height 2r when it comes from the right-hand column (upper tab
 * level) and at 2r + 1 when it comes from the left-hand one (lower tab level). A trunk runs from its topmost stub down to the bus.
 *
 *     left unit --+----o      n's stub crosses m's trunk: m stands left of n and has begun above that height
 *                 m    n
 */

/** The stubs of one net from one column into one channel. */
export interface Stubs {
  readonly net: number;
  /** The topmost one's row. */
  readonly first: number;
  readonly count: number;
  /** fromRow[r]: those in row r and below, r up to one more than there are rows. */
  readonly fromRow: readonly number[];
  /** Whether the trunk that they reach is the first of its net, and the last: a bus runs from the one to the other. */
  readonly opens: boolean;
  readonly closes: boolean;
}

/** Lengths in whole nanometres that a hookup is measured in. */
export interface Lengths {
  /** From row to row, and of each tab level from the row's middle. */
  readonly row: number;
  readonly level: number;
  /** From track to track, and from a column's middle to the nearest track's. */
  readonly track: number;
  readonly reach: number;
}

export interface ChannelSetting {
  readonly rows: number;
  readonly tracks: number;
  readonly lengths: Lengths;
  /** Nets whose crossovers and lengths count: the bits. */
  readonly counted: readonly boolean[];
  /** What a crossover costs; all lengths of a hookup together stay below it. */
  readonly crossoverCost: number;
}

/** Nets of one channel up to which their order is exact. */
export const EXACT_ORDER = 14;

/** The height at which a net's trunk begins. */
const topOf = (left: Stubs | undefined, right: Stubs | undefined): number =>
  Math.min(left ? 2 * left.first + 1 : Infinity, right ? 2 * right.first : Infinity);

/** Solves one channel after another in its own scratch memory. */
export class ChannelSolver {
  readonly #setting: ChannelSetting;
  /** What each track to the right adds to the length of a net's stubs and bus. */
  readonly #slope: Float64Array;
  /** passing[net * sets + set]: what the crossovers cost that the net brings if the set stands left of it; nets by their place in `#nets`. */
  #passing = new Float64Array(1 << 6);
  #cost = new Float64Array(1 << 6);
  #nets: number[] = [];
  #base = 0;
  #full = Infinity;

  constructor(setting: ChannelSetting) {
    this.#setting = setting;
    this.#slope = new Float64Array(setting.tracks);
  }

  /** Above this height some track of the channel last solved is free; Infinity: all the way down. */
  get full(): number {
    return this.#full;
  }

  /**
   * The least cost of a channel: crossovers at their cost plus the length of its stubs and trunks in the core, and what its outermost
   * trunks add to their buses. What is left out is the same for every order and every choice of sides.
   * @param left, right: stubs from the left-hand and from the right-hand column, by ascending net; at most `EXACT_ORDER` nets.
   */
  solve(left: readonly Stubs[], right: readonly Stubs[]): number {
    this.#prepare(left, right);
    this.#sweep();
    return this.#base + this.#cost[(1 << this.#nets.length) - 1];
  }

  /** The net on every track, -1 a free one, at the cost that `solve` finds. Ties go to the nets listed first. */
  order(left: readonly Stubs[], right: readonly Stubs[]): number[] {
    this.#prepare(left, right);
    const { tracks } = this.#setting;
    const sets = 1 << this.#nets.length;
    const last = Array.from({ length: tracks }, () => new Int8Array(sets).fill(-1));
    this.#sweep(last);
    const onTrack = new Array<number>(tracks).fill(-1);
    for (let track = tracks - 1, set = sets - 1; set > 0; track--) {
      const n = last[track][set];
      if (n === -1) continue;
      onTrack[track] = this.#nets[n];
      set ^= 1 << n;
    }
    return onTrack;
  }

  #prepare(left: readonly Stubs[], right: readonly Stubs[]): void {
    const { rows, tracks, lengths, counted, crossoverCost } = this.#setting;
    const nets: number[] = (this.#nets = []);
    const lefts: (Stubs | undefined)[] = [];
    const rights: (Stubs | undefined)[] = [];
    for (let i = 0, j = 0; i < left.length || j < right.length;) {
      const net = Math.min(left[i]?.net ?? Infinity, right[j]?.net ?? Infinity);
      nets.push(net);
      lefts.push(left[i]?.net === net ? left[i++] : undefined);
      rights.push(right[j]?.net === net ? right[j++] : undefined);
    }
    const count = nets.length;
    if (count > tracks || count > EXACT_ORDER) throw new RangeError(`${count} nets on ${tracks} tracks`);
    let base = 0;
    let latest = -1;
    const tops: number[] = [];
    for (let n = 0; n < count; n++) {
      const fromLeft = lefts[n];
      const fromRight = rights[n];
      const top = topOf(fromLeft, fromRight);
      tops.push(top);
      if (top > latest) latest = top;
      this.#slope[n] = 0;
      if (!counted[nets[n]]) continue;
      let slope = 0;
      if (fromLeft) {
        slope += fromLeft.count;
        if (fromLeft.opens) [base, slope] = [base - lengths.reach, slope - 1];
        if (fromLeft.closes) [base, slope] = [base + lengths.reach, slope + 1];
      }
      if (fromRight) {
        const farthest = (tracks - 1) * lengths.track;
        [base, slope] = [base + fromRight.count * farthest, slope - fromRight.count];
        if (fromRight.opens) [base, slope] = [base + lengths.reach + farthest, slope - 1];
        if (fromRight.closes) [base, slope] = [base - lengths.reach - farthest, slope + 1];
      }
      base += (rows - (top >> 1)) * lengths.row + (top % 2 === 0 ? lengths.level : -lengths.level);
      this.#slope[n] = slope;
    }
    this.#base = base;
    this.#full = count === tracks ? latest : Infinity;
    const sets = 1 << count;
    if (this.#passing.length < count * sets) this.#passing = new Float64Array(count * sets);
    if (this.#cost.length < sets) this.#cost = new Float64Array(sets);
    const passing = this.#passing;
    for (let n = 0; n < count; n++) {
      const at = n * sets;
      passing[at] = 0;
      for (let m = 0; m < count; m++) {
        let pair = 0;
        if (m !== n && counted[nets[m]] && counted[nets[n]]) {
          const over = lefts[n]?.fromRow[(tops[m] + 1) >> 1] ?? 0;
          const under = rights[m]?.fromRow[(tops[n] >> 1) + 1] ?? 0;
          pair = crossoverCost * (over + under);
        }
        const bit = 1 << m;
        for (let set = 0; set < bit; set++) passing[at + bit + set] = passing[at + set] + pair;
      }
    }
  }

  /** Track after track from the left: the least cost of having a set of nets on the tracks so far. */
  #sweep(last?: readonly Int8Array[]): void {
    const { tracks, lengths } = this.#setting;
    const count = this.#nets.length;
    const sets = 1 << count;
    const cost = this.#cost;
    const passing = this.#passing;
    const slope = this.#slope;
    cost.fill(Infinity, 0, sets);
    cost[0] = 0;
    for (let track = 0; track < tracks; track++) {
      const right = track * lengths.track;
      // From the largest set down: what a set is made of is still as the track before left it.
      for (let set = sets - 1; set > 0; set--) {
        let best = cost[set];
        let net = -1;
        for (let rest = set; rest !== 0; rest &= rest - 1) {
          const n = 31 - Math.clz32(rest & -rest);
          const before = set ^ (1 << n);
          const value = cost[before] + passing[n * sets + before] + slope[n] * right;
          if (value < best) {
            best = value;
            net = n;
          }
        }
        cost[set] = best;
        if (last !== undefined && net !== -1) last[track][set] = net;
      }
    }
  }
}
