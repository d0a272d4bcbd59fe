import type { CostTerm, Deal } from '../array/cost-term.js';
import { perPpmPerUm, perPpmPerUm2, pitchNm } from './figures.js';
import { momentsOfBlocks } from './moments.js';

/**
 * Half the sum of the lengths of the bits' first-order residuals, LSB per ppm/um: an upper bound of the first order, 0
 * exactly where that is 0, and cheap to follow.
 */
export function firstOrderTerm(deal: Deal, pitch_um: readonly [x: number, y: number]): CostTerm {
  const [px, py] = pitchNm(pitch_um);
  const { x, y } = momentsOfBlocks(deal);
  // |a|^2 = px^2 (x^2 + (py / px)^2 y^2): the norm of the kernel with b = 0, where its trace is never the larger.
  const unit = perPpmPerUm(BigInt(px) * BigInt(px), 1n);
  return new ResidualTerm('first order', deal, [x, new Float64Array(x.length), y], 0, (py / px) * (py / px), unit);
}

/**
 * Half the sum of the nuclear norms of the bits' second-order residuals, LSB per ppm/um^2: an upper bound of the second
 * order, tight where the residuals line up, and cheap to follow.
 */
export function secondOrderTerm(deal: Deal, pitch_um: readonly [x: number, y: number]): CostTerm {
  const [px, py] = pitchNm(pitch_um);
  const { xx, yy, xy } = momentsOfBlocks(deal);
  const ratio = (py / px) * (py / px);
  const unit = perPpmPerUm2(BigInt(px * px) * BigInt(px * px), 1n);
  return new ResidualTerm('second order', deal, [xx, yy, xy], ratio, 4 * ratio, unit);
}

/**
 * The kernel of both. Three components (a, b, c) a net, and the norm sqrt(max((a + r b)^2, (a - r b)^2 + q c^2)).
 *
 * `residual` holds W S_k - w_k sum_j S_j in whole numbers, W the bits' weights together: at most W * units * columns^2 in
 * half-pitches, below 2^53 for 16,383 units on cores of up to 5,700 columns or rows. So a swap and the same swap again leave
 * it as it was, bit for bit.
 */
class ResidualTerm implements CostTerm {
  readonly #netOfBlock: Uint8Array;
  readonly #weight: Float64Array;
  readonly #total: number;
  readonly #ratio: number;
  readonly #cross: number;
  readonly #unit: number;
  /** [3 * block + component], half-pitches. */
  readonly #moment: Float64Array;
  /** [3 * net + component]. */
  readonly #residual: Float64Array;
  /** [net]; 0 for nets without weight. */
  readonly #norm: Float64Array;

  constructor(
    readonly name: string,
    { nets, weight, netOfBlock }: Deal,
    components: readonly [a: Float64Array, b: Float64Array, c: Float64Array],
    ratio: number,
    cross: number,
    lsbPerUnit: number,
  ) {
    this.#netOfBlock = netOfBlock;
    this.#weight = weight;
    this.#total = weight.reduce((sum, w) => sum + w, 0);
    this.#ratio = ratio;
    this.#cross = cross;
    this.#unit = this.#total > 0 ? lsbPerUnit / this.#total : 0;
    this.#moment = new Float64Array(3 * netOfBlock.length);
    this.#residual = new Float64Array(3 * nets);
    this.#norm = new Float64Array(nets);
    for (let i = 0; i < 3; i++) {
      const sum = new Float64Array(nets);
      let bits = 0;
      netOfBlock.forEach((net, block) => {
        const moment = components[i][block];
        this.#moment[3 * block + i] = moment;
        sum[net] += moment;
        if (weight[net] > 0) bits += moment;
      });
      for (let net = 0; net < nets; net++) this.#residual[3 * net + i] = this.#total * sum[net] - weight[net] * bits;
    }
    this.#measure();
  }

  value(): number {
    let sum = 0;
    for (let net = 0; net < this.#norm.length; net++) sum += this.#norm[net];
    return this.#unit * sum;
  }

  delta(a: number, b: number): number {
    const netA = this.#netOfBlock[a];
    const netB = this.#netOfBlock[b];
    if (netA === netB) return 0;
    const moment = this.#moment;
    const i = 3 * a;
    const j = 3 * b;
    const d0 = moment[j] - moment[i];
    const d1 = moment[j + 1] - moment[i + 1];
    const d2 = moment[j + 2] - moment[i + 2];
    if (this.#weight[netA] === 0 || this.#weight[netB] === 0) return this.#deltaOfTotal(netA, netB, d0, d1, d2);
    // Both are bits: their sum stays, so only these two residuals move.
    const w = this.#total;
    const residual = this.#residual;
    const p = 3 * netA;
    const q = 3 * netB;
    const after =
      this.#normOf(residual[p] + w * d0, residual[p + 1] + w * d1, residual[p + 2] + w * d2) +
      this.#normOf(residual[q] - w * d0, residual[q + 1] - w * d1, residual[q + 2] - w * d2);
    return this.#unit * (after - this.#norm[netA] - this.#norm[netB]);
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
    } else this.#measure();
  }

  /** A bit swaps with a net without weight: the bits' sum moves, and with it every bit's residual. */
  #deltaOfTotal(netA: number, netB: number, d0: number, d1: number, d2: number): number {
    const weight = this.#weight;
    const bit = weight[netA] > 0 ? netA : netB;
    if (weight[bit] === 0) return 0;
    const sign = bit === netA ? 1 : -1;
    const residual = this.#residual;
    let change = 0;
    for (let net = 0; net < weight.length; net++) {
      if (weight[net] === 0) continue;
      const factor = sign * ((net === bit ? this.#total : 0) - weight[net]);
      const p = 3 * net;
      change +=
        this.#normOf(residual[p] + factor * d0, residual[p + 1] + factor * d1, residual[p + 2] + factor * d2) -
        this.#norm[net];
    }
    return this.#unit * change;
  }

  #normOf(a: number, b: number, c: number): number {
    const scaled = this.#ratio * b;
    const trace = a + scaled;
    const difference = a - scaled;
    const square = trace * trace;
    const other = difference * difference + this.#cross * c * c;
    return Math.sqrt(square > other ? square : other);
  }

  #measureNet(net: number): void {
    if (this.#weight[net] === 0) return;
    this.#norm[net] = this.#normOf(this.#residual[3 * net], this.#residual[3 * net + 1], this.#residual[3 * net + 2]);
  }

  #measure(): void {
    for (let net = 0; net < this.#norm.length; net++) this.#measureNet(net);
  }
}
