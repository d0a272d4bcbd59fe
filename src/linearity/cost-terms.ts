import type { CostTerm, Deal } from '../array/cost-term.js';
import { perPpmPerUm, perPpmPerUm2, pitchNm } from './figures.js';
import { momentsOfBlocks } from './moments.js';

/** The first order, LSB per ppm/um, to 0.9 % and a twentieth of its mean over directions; 0 exactly where the first order is 0. */
export function firstOrderTerm(deal: Deal, pitch_um: readonly [x: number, y: number]): CostTerm {
  const [px, py] = pitchNm(pitch_um);
  const { x, y } = momentsOfBlocks(deal);
  const unit = perPpmPerUm(BigInt(px) * BigInt(px), 1n);
  return new ProbedTerm(
    'first order',
    deal,
    [new Float64Array(x.length), x, y],
    (_, u, v) => [0, u, (py / px) * v],
    unit,
  );
}

/**
 * The second order, LSB per ppm/um^2, to 0.9 % and a twentieth of its mean over shapes.
 *
 * The worst of all shapes of spectral norm 1 is an extreme one: the bowl, whose product with B is the trace, or a saddle at some angle,
 * whose product with B is u cos t + v sin t with u = Bxx - Byy and v = 2 Bxy.
 */
export function secondOrderTerm(deal: Deal, pitch_um: readonly [x: number, y: number]): CostTerm {
  const [px, py] = pitchNm(pitch_um);
  const { xx, xy, yy } = momentsOfBlocks(deal);
  const ratio = py / px;
  const unit = perPpmPerUm2(BigInt(px * px) * BigInt(px * px), 1n);
  return new ProbedTerm(
    'second order',
    deal,
    [xx, xy, yy],
    (a, b, c) => [a + ratio * ratio * c, a - ratio * ratio * c, 2 * ratio * b],
    unit,
  );
}

/** Angles over half a turn: no direction is farther than half a step from one of them, and the cosine of that is 0.9914. */
const ANGLES = 12;
const PROBES = ANGLES + 1;
/** Share of the mean over all probes in the cost: it leads downhill where the largest does not move. */
const MEAN = 0.05 / PROBES;

// Cosines of multiples of a twelfth of half a turn, from square roots alone: the same on every machine.
const QUARTER = [
  1,
  (Math.sqrt(6) + Math.sqrt(2)) / 4,
  Math.sqrt(3) / 2,
  Math.sqrt(2) / 2,
  0.5,
  (Math.sqrt(6) - Math.sqrt(2)) / 4,
  0,
];
const cosine = (i: number): number => (i <= 6 ? QUARTER[i] : -QUARTER[12 - i]);
const sine = (i: number): number => cosine(Math.abs(6 - i));

/**
 * The kernel of both: a largest product of the residuals with a unit shape, over all codes and shapes.
 *
 * For a fixed shape the worst code takes the bits of one sign, and the residuals of all bits add up to 0, so the largest product over codes
 * is half the sum of the absolute products: 1/2 sum_k |p . r_k|. Each of the 13 probes p (the trace, and u, v along 12 angles) keeps that
 * sum; a swap of two bits changes two of its terms.
 *
 * `residual` holds W S_k - w_k sum_j S_j in whole numbers, W the bits' weights together: at most W * units * columns^2 in half-pitches,
 * below 2^53 for 16,383 units on cores of up to 5,700 columns or rows. Products are made anew from it after every swap, so a swap and the
 * same swap again leave the term as it was, bit for bit.
 */
class ProbedTerm implements CostTerm {
  readonly #netOfBlock: Uint8Array;
  readonly #weight: Float64Array;
  readonly #total: number;
  readonly #unit: number;
  readonly #shape: (a: number, b: number, c: number) => readonly [trace: number, u: number, v: number];
  /** [3 * block + component], half-pitches. */
  readonly #moment: Float64Array;
  /** [PROBES * block + probe], the block's products times W. */
  readonly #step: Float64Array;
  /** [3 * net + component]. */
  readonly #residual: Float64Array;
  /** [PROBES * net + probe]; 0 for nets without weight. */
  readonly #product: Float64Array;
  /** [probe]: sum over nets of the absolute products. */
  readonly #sum = new Float64Array(PROBES);
  #value = 0;

  constructor(
    readonly name: string,
    { nets, weight, netOfBlock }: Deal,
    components: readonly [a: Float64Array, b: Float64Array, c: Float64Array],
    shape: (a: number, b: number, c: number) => readonly [trace: number, u: number, v: number],
    lsbPerUnit: number,
  ) {
    this.#netOfBlock = netOfBlock;
    this.#weight = weight;
    this.#shape = shape;
    this.#total = weight.reduce((sum, w) => sum + w, 0);
    this.#unit = this.#total > 0 ? lsbPerUnit / this.#total : 0;
    const blocks = netOfBlock.length;
    this.#moment = new Float64Array(3 * blocks);
    this.#step = new Float64Array(PROBES * blocks);
    this.#residual = new Float64Array(3 * nets);
    this.#product = new Float64Array(PROBES * nets);
    const bits = [0, 0, 0];
    netOfBlock.forEach((net, block) => {
      components.forEach((component, i) => {
        this.#moment[3 * block + i] = component[block];
        this.#residual[3 * net + i] += this.#total * component[block];
        if (weight[net] > 0) bits[i] += component[block];
      });
      const [a, b, c] = components;
      this.#probe(this.#step, block, this.#total * a[block], this.#total * b[block], this.#total * c[block]);
    });
    for (let net = 0; net < nets; net++)
      for (let i = 0; i < 3; i++) this.#residual[3 * net + i] -= weight[net] * bits[i];
    for (let net = 0; net < nets; net++) this.#measureNet(net);
    this.#add();
  }

  value(): number {
    return this.#value;
  }

  delta(a: number, b: number): number {
    const netA = this.#netOfBlock[a];
    const netB = this.#netOfBlock[b];
    if (netA === netB) return 0;
    if (this.#weight[netA] === 0 || this.#weight[netB] === 0) return this.#deltaOfTotal(netA, netB, a, b);
    // Both are bits: their sum stays, so only these two residuals move.
    const step = this.#step;
    const product = this.#product;
    const sum = this.#sum;
    let i = PROBES * a;
    let j = PROBES * b;
    let p = PROBES * netA;
    let q = PROBES * netB;
    let largest = 0;
    let all = 0;
    for (let probe = 0; probe < PROBES; probe++) {
      const d = step[j++] - step[i++];
      const was = product[p++];
      const other = product[q++];
      const s = sum[probe] + Math.abs(was + d) - Math.abs(was) + Math.abs(other - d) - Math.abs(other);
      if (s > largest) largest = s;
      all += s;
    }
    return this.#unit * (largest + MEAN * all) - this.#value;
  }

  apply(a: number, b: number): void {
    const netA = this.#netOfBlock[a];
    const netB = this.#netOfBlock[b];
    if (netA === netB) return;
    const weight = this.#weight;
    const gainA = weight[netA] > 0 ? 1 : 0;
    const gainB = weight[netB] > 0 ? 1 : 0;
    for (let i = 0; i < 3; i++) {
      const d = this.#moment[3 * b + i] - this.#moment[3 * a + i];
      const bits = (gainA - gainB) * d;
      if (bits !== 0) for (let net = 0; net < weight.length; net++) this.#residual[3 * net + i] -= weight[net] * bits;
      this.#residual[3 * netA + i] += gainA * this.#total * d;
      this.#residual[3 * netB + i] -= gainB * this.#total * d;
    }
    if (gainA === gainB) {
      this.#measureNet(netA);
      this.#measureNet(netB);
    } else for (let net = 0; net < weight.length; net++) this.#measureNet(net);
    this.#add();
  }

  /** A bit swaps with a net without weight: the bits' sum moves, and with it every bit's residual. */
  #deltaOfTotal(netA: number, netB: number, a: number, b: number): number {
    const weight = this.#weight;
    const bit = weight[netA] > 0 ? netA : netB;
    if (weight[bit] === 0) return 0;
    const sign = (bit === netA ? 1 : -1) / this.#total;
    let largest = 0;
    let all = 0;
    for (let probe = 0; probe < PROBES; probe++) {
      const d = sign * (this.#step[PROBES * b + probe] - this.#step[PROBES * a + probe]);
      let s = 0;
      for (let net = 0; net < weight.length; net++) {
        if (weight[net] === 0) continue;
        const factor = (net === bit ? this.#total : 0) - weight[net];
        s += Math.abs(this.#product[PROBES * net + probe] + factor * d);
      }
      if (s > largest) largest = s;
      all += s;
    }
    return this.#unit * (largest + MEAN * all) - this.#value;
  }

  #probe(into: Float64Array, row: number, a: number, b: number, c: number): void {
    const [trace, u, v] = this.#shape(a, b, c);
    for (let i = 0; i < ANGLES; i++) into[PROBES * row + i] = u * cosine(i) + v * sine(i);
    into[PROBES * row + ANGLES] = trace;
  }

  #measureNet(net: number): void {
    if (this.#weight[net] === 0) return;
    const r = this.#residual;
    this.#probe(this.#product, net, r[3 * net], r[3 * net + 1], r[3 * net + 2]);
  }

  #add(): void {
    this.#sum.fill(0);
    let largest = 0;
    let all = 0;
    for (let probe = 0; probe < PROBES; probe++) {
      let s = 0;
      for (let net = 0; net < this.#weight.length; net++) s += Math.abs(this.#product[PROBES * net + probe]);
      this.#sum[probe] = s;
      if (s > largest) largest = s;
      all += s;
    }
    this.#value = this.#unit * (largest + MEAN * all);
  }
}
