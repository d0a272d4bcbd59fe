import type { CostTerm } from '../array/cost-term.js';
import { exp, ln } from '../core/exponential.js';
import type { Random } from '../core/random.js';
import type { Dealing } from './dealing.js';

export interface WeightedTerm {
  readonly term: CostTerm;
  /** Finite, at least 0. */
  readonly weight: number;
}

const LEVELS = 160;
/** Share of a start's work that is spent cooling; what is left goes into the descent. */
const COOLING = 0.85;
const COLDEST = 1e-5;
const SAMPLES = 512;
/** In the descent a change below this share of the cost counts as none: it may be rounding, and rounding must not go round in circles. */
const LEAST_GAIN = 1e-12;

// -ln of the midpoints of 4096 equal parts of (0, 1): an exchange that costs `delta` is taken if delta <= temperature * threshold.
const THRESHOLDS = Float64Array.from({ length: 4096 }, (_, i) => -ln((i + 0.5) / 4096));
const CHOICES = 4096;

/**
 * One start of the search: simulated annealing (Kirkpatrick, Gelatt, Vecchi, Science 220, 1983; from memory) by exchanges of blocks,
 * cooled geometrically, then a descent until no exchange improves or the work is spent. A trial allocates nothing.
 *
 * Blocks stand in `order`, sorted by group and, within it, by net: a segment. An exchange keeps the number of blocks of a net, so
 * segments keep their places and lengths.
 *
 *     order     | pairs of B1 | pairs of B2 . . . . | pairs of fill | triples of B3 | ...
 *     segment     0             1                     2               3
 *
 * A trial takes a segment with a chance that grows as the fourth root of its length (small capacitors have few blocks, and where those
 * are matters most), a block of it, and a block of another segment of the same group. The way back is as likely as the way there,
 * since lengths do not change.
 */
export class AnnealedStart {
  readonly dealing: Dealing;
  readonly #terms: readonly CostTerm[];
  readonly #weights: Float64Array;
  readonly #random: Random;
  readonly #netOfBlock: Uint8Array;
  readonly #order: Int32Array;
  readonly #place: Int32Array;
  /** Segment s is order[first[s]] .. order[end[s] - 1], inside the group order[groupFirst[s]] .. order[groupEnd[s] - 1]. */
  readonly #first: Int32Array;
  readonly #end: Int32Array;
  readonly #groupFirst: Int32Array;
  readonly #groupEnd: Int32Array;
  readonly #choice: Uint16Array;
  readonly #best: Uint8Array;
  readonly #work: number;
  readonly #trialsPerLevel: number;
  readonly #cooling: number;
  #temperature: number;
  #level = 0;
  #trialsLeft: number;
  #spent = 0;
  #cost: number;
  #bestCost: number;
  #done: boolean;
  // The descent compares the block at place i with those at places j < i, round and round, until a whole round has gained nothing.
  #i = 1;
  #j = 0;
  #sinceGain = 0;

  /** @param heat what cooling begins at, over the mean change by an exchange: below 1 much of what was dealt stays as it is. */
  constructor(dealing: Dealing, terms: readonly WeightedTerm[], work: number, random: Random, heat = 1) {
    this.dealing = dealing;
    this.#terms = terms.map(({ term }) => term);
    this.#weights = Float64Array.from(terms, ({ weight }) => weight);
    this.#random = random;
    const { group } = dealing;
    const nets = (this.#netOfBlock = dealing.deal.netOfBlock);
    this.#order = Int32Array.from(nets.keys()).sort((a, b) => group[a] - group[b] || nets[a] - nets[b] || a - b);
    this.#place = new Int32Array(nets.length);
    this.#order.forEach((block, place) => (this.#place[block] = place));

    const segments = segmentsOf(this.#order, group, nets);
    this.#first = Int32Array.from(segments, (s) => s.first);
    this.#end = Int32Array.from(segments, (s) => s.end);
    this.#groupFirst = Int32Array.from(segments, (s) => s.groupFirst);
    this.#groupEnd = Int32Array.from(segments, (s) => s.groupEnd);
    this.#choice = choices(segments);

    this.#work = Math.max(1, Math.floor(work));
    this.#trialsPerLevel = Math.max(1, Math.floor((COOLING * this.#work) / LEVELS));
    this.#trialsLeft = this.#trialsPerLevel;
    this.#cooling = exp(ln(COLDEST / heat) / (LEVELS - 1));
    this.#cost = this.#bestCost = this.#recount();
    this.#best = nets.slice();
    this.#done = this.#cost === 0 || segments.length === 0;
    this.#temperature = this.#done ? 0 : this.#meanChange() * heat;
  }

  get done(): boolean {
    return this.#done;
  }

  get progress(): number {
    return this.#done ? 1 : this.#spent / this.#work;
  }

  /** The least of the costs at the ends of levels and now. Changes nothing: when it is asked has no influence on the search. */
  best(): { readonly cost: number; readonly netOfBlock: Uint8Array } {
    const now = this.#recount();
    return now < this.#bestCost
      ? { cost: now, netOfBlock: this.#netOfBlock.slice() }
      : { cost: this.#bestCost, netOfBlock: this.#best.slice() };
  }

  /** Runs at most `work` trials, a whole number of at least 1. @returns how many. */
  step(work: number): number {
    let left = work;
    while (left > 0 && !this.#done) {
      const most = Math.min(left, this.#work - this.#spent);
      const ran = this.#level < LEVELS ? this.#cool(most) : this.#descend(most);
      left -= ran;
      this.#spent += ran;
      if (this.#spent >= this.#work) this.#finish();
    }
    return work - left;
  }

  #recount(): number {
    let cost = 0;
    for (let t = 0; t < this.#terms.length; t++) cost += this.#weights[t] * this.#terms[t].value();
    return cost;
  }

  /** The cost afresh, free of the rounding of added changes; kept if it is the least so far. Nothing is less than 0. */
  #keep(): void {
    this.#cost = this.#recount();
    if (this.#cost < this.#bestCost) {
      this.#bestCost = this.#cost;
      this.#best.set(this.#netOfBlock);
    }
    if (this.#cost === 0) this.#done = true;
  }

  #finish(): void {
    this.#keep();
    this.#done = true;
  }

  #meanChange(): number {
    let sum = 0;
    for (let n = 0; n < SAMPLES; n++) {
      const s = this.#choice[this.#random.below(CHOICES)];
      sum += Math.abs(this.#delta(this.#blockOf(s), this.#partnerOf(s)));
    }
    return sum / SAMPLES;
  }

  #blockOf(segment: number): number {
    const first = this.#first[segment];
    return this.#order[first + this.#random.below(this.#end[segment] - first)];
  }

  /** A block of the same group outside the segment. */
  #partnerOf(segment: number): number {
    const first = this.#first[segment];
    const end = this.#end[segment];
    const start = this.#groupFirst[segment];
    const place = start + this.#random.below(this.#groupEnd[segment] - start - (end - first));
    return this.#order[place < first ? place : place + end - first];
  }

  #delta(a: number, b: number): number {
    const terms = this.#terms;
    const weights = this.#weights;
    let delta = 0;
    for (let t = 0; t < terms.length; t++) delta += weights[t] * terms[t].delta(a, b);
    return delta;
  }

  #exchange(a: number, b: number, delta: number): void {
    for (let t = 0; t < this.#terms.length; t++) this.#terms[t].apply(a, b);
    const nets = this.#netOfBlock;
    const net = nets[a];
    nets[a] = nets[b];
    nets[b] = net;
    const place = this.#place[a];
    this.#order[place] = b;
    this.#order[this.#place[b]] = a;
    this.#place[a] = this.#place[b];
    this.#place[b] = place;
    this.#cost += delta;
  }

  #cool(work: number): number {
    const trials = Math.min(work, this.#trialsLeft);
    const temperature = this.#temperature;
    for (let n = 0; n < trials; n++) {
      const segment = this.#choice[this.#random.below(CHOICES)];
      const a = this.#blockOf(segment);
      const b = this.#partnerOf(segment);
      const delta = this.#delta(a, b);
      if (delta <= 0 || delta <= temperature * THRESHOLDS[this.#random.below(4096)]) this.#exchange(a, b, delta);
    }
    this.#trialsLeft -= trials;
    if (this.#trialsLeft === 0) {
      this.#keep();
      this.#level++;
      this.#temperature *= this.#cooling;
      this.#trialsLeft = this.#trialsPerLevel;
    }
    return trials;
  }

  #descend(work: number): number {
    const order = this.#order;
    const nets = this.#netOfBlock;
    const { group } = this.dealing;
    const round = (order.length * (order.length - 1)) / 2;
    let n = 0;
    while (n < work) {
      if (this.#sinceGain >= round) {
        this.#finish();
        break;
      }
      n++;
      this.#sinceGain++;
      const a = order[this.#i];
      const b = order[this.#j];
      if (nets[a] !== nets[b] && group[a] === group[b]) {
        const delta = this.#delta(a, b);
        if (delta < -LEAST_GAIN * this.#cost) {
          this.#exchange(a, b, delta);
          this.#sinceGain = 0;
        }
      }
      if (++this.#j === this.#i) {
        this.#j = 0;
        if (++this.#i === order.length) this.#i = 1;
      }
    }
    return n;
  }
}

interface Segment {
  readonly first: number;
  readonly end: number;
  readonly groupFirst: number;
  readonly groupEnd: number;
}

/** Runs of one group and net, where the group has another net to exchange with. */
function segmentsOf(order: Int32Array, group: Int32Array, nets: Uint8Array): Segment[] {
  const ends = (from: number, same: (a: number, b: number) => boolean): number => {
    let end = from + 1;
    while (end < order.length && same(order[from], order[end])) end++;
    return end;
  };
  const segments: Segment[] = [];
  for (let groupFirst = 0; groupFirst < order.length;) {
    const groupEnd = ends(groupFirst, (a, b) => group[a] === group[b]);
    for (let first = groupFirst; first < groupEnd;) {
      const end = ends(first, (a, b) => group[a] === group[b] && nets[a] === nets[b]);
      if (end - first < groupEnd - groupFirst) segments.push({ first, end, groupFirst, groupEnd });
      first = end;
    }
    groupFirst = groupEnd;
  }
  return segments;
}

/** A table of segments, each as often as the fourth root of its length asks, at least once. */
function choices(segments: readonly Segment[]): Uint16Array {
  const table = new Uint16Array(CHOICES);
  const share = segments.map((s) => Math.sqrt(Math.sqrt(s.end - s.first)));
  const total = share.reduce((sum, s) => sum + s, 0);
  let upTo = 0;
  share.forEach((s, i) => {
    const from = Math.floor((CHOICES * upTo) / total);
    upTo += s;
    table.fill(i, from, i === share.length - 1 ? CHOICES : Math.floor((CHOICES * upTo) / total));
  });
  return table;
}
