import type { ColumnLimit } from '../array/column-limit.js';
import { exp, ln } from '../core/exponential.js';
import type { Random } from '../core/random.js';

/** Correlation between columns, and what it costs in (column, net) pairs. */
export interface Dispersion {
  /** [class * classes + class]: sum of the correlations of a pair in the one class with a pair in the other. */
  readonly kernel: Float64Array;
  /** Of 1 LSB of sigma INL, the root mean square over all codes, per sigma of a unit; what the annealing begins with. */
  readonly price: number;
  /** (column, net) pairs that there may be. Dispersion costs less as long as there are more, and more as long as there are fewer. */
  readonly netsLimit: number;
}

export interface ColumnQuotaRequest {
  /** Pairs to deal in each class of columns; class c is column c and its mirror image. */
  readonly capacity: readonly number[];
  /** Columns of a class: 2, or 1 for the middle column of an odd count. */
  readonly width: readonly number[];
  /** Squared offset of a class's columns from the centre. */
  readonly square: readonly number[];
  /** Pairs that each net gets; the fill, the last, among them. They add up to the capacities. */
  readonly pairs: readonly number[];
  /** 0 for the fill. */
  readonly weight: readonly number[];
  /** [net * classes + class]: columns of the class that hold the net already, whatever is dealt. */
  readonly present: Uint8Array;
  /** [net]: sum of the squared offsets of its cells that are dealt already. */
  readonly moment: readonly number[];
  /** What a unit of LSB moment, as a share of the LSB's own, costs in (column, net) pairs. */
  readonly price: number;
  /** What random mismatch costs, where it counts. */
  readonly dispersion?: Dispersion;
  /** On the nets of a column, where they are limited. */
  readonly limit?: ColumnLimit;
  readonly random: Random;
}

const LEVELS = 100;
const HOTTEST = 4;
const COLDEST = 0.02;
/** In (column, net) pairs, a net of a column beyond its limit. */
const BEYOND_LIMIT = 200;
const MOVES_PER_ENTRY = 20_000;
/** One move in so many exchanges two whole classes of columns. */
const WHOLE_CLASSES = 16;
/** What the moment costs at the end, over what it costs in the beginning: while hot, columns are shared out; then the moment is trimmed. */
const HARDENING = 5;
/** The price of dispersion follows the column nets from the level where these begin to settle to the last few, when it stands still. */
const FOLLOWED = { from: 30, to: 70, step: 1.05 };

/**
 * How many pairs of each net to put into each class of columns, so that few columns hold a net while the second moment across the
 * columns stays near what the weights ask for. Every (column, net) pair costs 1; the moment costs `price` times half the sum of the nets'
 * residuals, over the mean moment of one unit (what the LSB at the centre lacks anyhow).
 *
 * Where a column may hold only so many nets, each one beyond costs `BEYOND_LIMIT`: more than any gain, so that there is none in the end if
 * there need not be.
 *
 * Random mismatch, where it counts, costs the root of 1/4 sum_k q_k' K q_k, q_k = the net's pairs by class minus its share of all pairs, K
 * the correlation between classes: that of a placement whose columns have each net's cells evenly spread.
 *
 * Annealed on the table of quotas itself: a lot of a net changes places with as much of another, or two classes with each other, in one
 * move; where in their columns the cells stand is left to the search.
 *
 * @returns [net * classes + class].
 */
export function columnQuotas(request: ColumnQuotaRequest): Int32Array {
  const { random } = request;
  const table = new QuotaTable(request);
  const cooling = exp(ln(COLDEST / HOTTEST) / (LEVELS - 1));
  const hardening = exp(ln(HARDENING) / (LEVELS - 1));
  const moves = Math.ceil((MOVES_PER_ENTRY * table.nets * table.classes) / LEVELS);
  let temperature = HOTTEST;
  const accepts = (more: number): boolean =>
    more <= 0 || more <= -temperature * ln((random.bits() + 0.5) / 0x1_0000_0000);
  for (let level = 0; level < LEVELS; level++) {
    for (let n = 0; n < moves; n++) {
      const c = random.below(table.classes);
      const d = random.below(table.classes);
      if (random.below(WHOLE_CLASSES) === 0) table.exchangeClasses(c, d, accepts);
      else table.exchangeLots(random.below(table.nets), c, random.below(table.nets), d, random, accepts);
    }
    temperature *= cooling;
    if (level === LEVELS - 1) break;
    const follows = level >= FOLLOWED.from && level < FOLLOWED.to;
    table.reprice(hardening, follows ? FOLLOWED.step : 1);
  }
  return table.best;
}

type Accepts = (more: number) => boolean;

/** The table of quotas with what it costs, and the least that was met at the present price of the moment. */
class QuotaTable {
  readonly nets: number;
  readonly classes: number;
  readonly #request: ColumnQuotaRequest;
  readonly #fill: number;
  /** Sum of the weights. */
  readonly #total: number;
  readonly #quota: Int32Array;
  /** [net]: second moment across the columns. */
  readonly #moment: Float64Array;
  /** [net * classes + class]: (K q_net); the fill disturbs nobody. */
  readonly #field: Float64Array;
  /** [net]: how often its variance counts. The largest bit's counts three times, as in the search that follows. */
  readonly #times: readonly number[];
  /** [net]: what goes from one class to another in the exchange under way. */
  readonly #going: Int32Array;
  readonly #nearLimit: NearLimit | undefined;
  #price: number;
  #sigmaPrice: number;
  #columnNets = 0;
  #spread: number;
  #variance = 0;
  #least: number;
  #best: Int32Array;

  constructor(request: ColumnQuotaRequest) {
    const { capacity, width, square, pairs, weight } = request;
    this.#request = request;
    const nets = (this.nets = pairs.length);
    const classes = (this.classes = capacity.length);
    this.#fill = nets - 1;
    this.#total = weight.reduce((sum, w) => sum + w, 0);
    this.#quota = firstQuotas(capacity, pairs);
    this.#moment = Float64Array.from(request.moment);
    this.#field = new Float64Array(nets * classes);
    const largest = weight.reduce((a, b) => Math.max(a, b), 0);
    this.#times = weight.map((w) => (w > 0 && w === largest ? 3 : 1));
    this.#going = new Int32Array(nets);
    this.#price = request.price;
    this.#sigmaPrice = request.dispersion?.price ?? 0;
    this.#nearLimit = request.limit && new NearLimit(request.limit, width, this.#fill);
    for (let net = 0; net < nets; net++) {
      for (let c = 0; c < classes; c++) {
        if (this.#isHeld(net * classes + c)) this.#nearLimit?.change(net, c, 1);
        this.#moment[net] += 2 * this.#quota[net * classes + c] * square[c];
        this.#columnNets += this.#holds(net, c, width);
      }
      if (weight[net] === 0) continue;
      const pairsOff = (c: number) => this.#quota[net * classes + c] - (weight[net] / this.#total) * capacity[c];
      for (let c = 0; c < classes; c++) this.#addToField(net, c, pairsOff(c));
      for (let c = 0; c < classes; c++)
        this.#variance += this.#times[net] * pairsOff(c) * this.#field[net * classes + c];
    }
    this.#spread = this.#residue();
    this.#least = this.#cost();
    this.#best = this.#quota.slice();
  }

  get best(): Int32Array {
    return this.#best;
  }

  /**
   * From now on the moment costs `harder` times as much, and dispersion `step` times as much as it did or its inverse, as the column nets
   * ask for; what was the least before is forgotten.
   */
  reprice(harder: number, step: number): void {
    this.#price *= harder;
    const { dispersion } = this.#request;
    if (dispersion !== undefined) this.#sigmaPrice *= this.#columnNets > dispersion.netsLimit ? 1 / step : step;
    this.#spread = this.#residue();
    this.#least = Infinity;
    this.#keep();
  }

  /** A lot of net p in class c for as much of net q in class d: all that can be, every other time. */
  exchangeLots(p: number, c: number, q: number, d: number, random: Random, accepts: Accepts): void {
    const { classes } = this;
    const most = Math.min(this.#quota[p * classes + c], this.#quota[q * classes + d]);
    if (p === q || c === d || most === 0) return;
    const going = random.below(2) === 0 ? most : 1 + random.below(most);
    this.#going.fill(0);
    this.#going[p] = going;
    this.#going[q] = -going;
    this.#try(c, d, [p, q], accepts);
  }

  /** All that is in class c for all that is in class d. */
  exchangeClasses(c: number, d: number, accepts: Accepts): void {
    const { capacity, width } = this.#request;
    if (c === d || capacity[c] !== capacity[d] || width[c] !== width[d]) return;
    const nets = this.#everyNet;
    for (const net of nets)
      this.#going[net] = this.#quota[net * this.classes + c] - this.#quota[net * this.classes + d];
    this.#try(c, d, nets, accepts);
  }

  get #everyNet(): readonly number[] {
    return this.#times.map((_, net) => net);
  }

  /** Takes `#going` of the nets from class c to class d, and back if that is not accepted. */
  #try(c: number, d: number, nets: readonly number[], accepts: Accepts): void {
    const { width } = this.#request;
    let change = 0;
    let moved = 0;
    const over = this.#over;
    for (const net of nets) {
      moved += this.#varianceOf(net, c, d, this.#going[net]);
      change -= this.#holds(net, c, width) + this.#holds(net, d, width);
      this.#shift(net, c, d, this.#going[net]);
      change += this.#holds(net, c, width) + this.#holds(net, d, width);
    }
    const spread = this.#residue();
    const sigmas = this.#sigma(this.#variance + moved) - this.#sigma(this.#variance);
    if (!accepts(change + spread - this.#spread + this.#over - over + sigmas)) {
      for (const net of nets) this.#shift(net, c, d, -this.#going[net]);
      return;
    }
    for (const net of nets) {
      this.#addToField(net, c, -this.#going[net]);
      this.#addToField(net, d, this.#going[net]);
    }
    this.#columnNets += change;
    this.#spread = spread;
    this.#variance += moved;
    this.#keep();
  }

  #keep(): void {
    const cost = this.#cost();
    if (cost >= this.#least) return;
    this.#least = cost;
    this.#best = this.#quota.slice();
  }

  #cost(): number {
    return this.#columnNets + this.#spread + this.#over + this.#sigma(this.#variance);
  }

  #shift(net: number, c: number, d: number, count: number): void {
    const { square } = this.#request;
    this.#give(net, c, -count);
    this.#give(net, d, count);
    this.#moment[net] += 2 * count * (square[d] - square[c]);
  }

  #give(net: number, c: number, count: number): void {
    const i = net * this.classes + c;
    const before = this.#isHeld(i);
    this.#quota[i] += count;
    if (this.#isHeld(i) !== before) this.#nearLimit?.change(net, c, before ? -1 : 1);
  }

  #isHeld(i: number): boolean {
    return this.#quota[i] > 0 || this.#request.present[i] > 0;
  }

  get #over(): number {
    return this.#nearLimit?.cost ?? 0;
  }

  /** Columns of a class that hold a net. */
  #holds(net: number, c: number, width: readonly number[]): number {
    if (net === this.#fill) return 0;
    const i = net * this.classes + c;
    return this.#quota[i] > 0 ? width[c] : this.#request.present[i];
  }

  #residue(): number {
    const { weight } = this.#request;
    let bits = 0;
    for (let net = 0; net < this.nets; net++) if (weight[net] > 0) bits += this.#moment[net];
    if (bits === 0) return 0;
    let sum = 0;
    for (let net = 0; net < this.nets; net++)
      if (weight[net] > 0) sum += Math.abs(this.#moment[net] - (weight[net] / this.#total) * bits);
    return (this.#price * sum * this.#total) / (2 * bits);
  }

  #sigma(variance: number): number {
    return this.#sigmaPrice * 0.5 * Math.sqrt(variance > 0 ? variance : 0);
  }

  /** What the variance changes by if `count` pairs of a net go from class c to class d. */
  #varianceOf(net: number, c: number, d: number, count: number): number {
    const { dispersion, weight } = this.#request;
    if (dispersion === undefined || weight[net] === 0) return 0;
    const { classes } = this;
    const { kernel } = dispersion;
    const field = this.#field;
    const within = kernel[c * classes + c] + kernel[d * classes + d] - 2 * kernel[c * classes + d];
    return this.#times[net] * count * (2 * (field[net * classes + d] - field[net * classes + c]) + count * within);
  }

  #addToField(net: number, c: number, count: number): void {
    const kernel = this.#request.dispersion?.kernel;
    if (kernel === undefined || count === 0) return;
    const { classes } = this;
    for (let d = 0; d < classes; d++) this.#field[net * classes + d] += count * kernel[c * classes + d];
  }
}

/** Counts the nets of each class's columns as they come and go, and what is beyond the limit. */
class NearLimit {
  readonly #limit: ColumnLimit;
  readonly #width: readonly number[];
  readonly #fill: number;
  readonly #count: number[];
  #over = 0;
  #roomy: number;

  constructor(limit: ColumnLimit, width: readonly number[], fill: number) {
    this.#limit = limit;
    this.#width = width;
    this.#fill = fill;
    this.#count = width.map(() => 0);
    this.#roomy = width.length;
  }

  change(net: number, c: number, by: 1 | -1): void {
    const { most, forFill } = this.#limit;
    const before = this.#count[c];
    const now = before + (net === this.#fill ? by * forFill : by);
    this.#count[c] = now;
    this.#over += this.#width[c] * (Math.max(0, now - most) - Math.max(0, before - most));
    this.#roomy += (now < most ? 1 : 0) - (before < most ? 1 : 0);
  }

  /** In (column, net) pairs. */
  get cost(): number {
    return BEYOND_LIMIT * (this.#over + (this.#limit.spare && this.#roomy === 0 ? 1 : 0));
  }
}

/** Large nets first, class after class. */
function firstQuotas(capacity: readonly number[], pairs: readonly number[]): Int32Array {
  const classes = capacity.length;
  const quota = new Int32Array(pairs.length * classes);
  const room = [...capacity];
  const order = [...pairs.keys()].sort((a, b) => pairs[b] - pairs[a] || a - b);
  let c = 0;
  for (const net of order) {
    for (let left = pairs[net]; left > 0;) {
      if (c >= classes) throw new Error('the pairs fill the columns exactly');
      const count = Math.min(left, room[c]);
      quota[net * classes + c] += count;
      left -= count;
      room[c] -= count;
      if (room[c] === 0) c++;
    }
  }
  return quota;
}
