import type { CostTerm, Deal } from '../array/cost-term.js';
import type { Correlation } from './correlation.js';

// Correlations are rounded to multiples of 2^-24: sums over all pairs of 16,383 units are then exact in doubles (28 + 24 bits).
const GRAIN = 16777216;
// Half the root of the mean variance, back in units of rho.
const UNIT = 0.5 / 4096;

/** How often the largest bit's variance counts: its transition has the largest DNL, and the codes about it the largest INL. */
const LARGEST = 3;

/**
 * Random mismatch of correlated units: the root mean square over all codes of sigma INL, in LSB per sigma of one unit, with the largest
 * bit counted three times.
 *
 * With e_k = s_k - u_k S, u_k = w_k / W, s_k the sum over the units of bit k and S over those of all bits, the errors of all bits add up to
 * 0, so over codes of independent bits the mean of (sum d_k e_k)^2 is 1/4 sum_k Var e_k, and
 *
 *   Var e_k = C_kk - 2 u_k C_kS + u_k^2 C_SS,   C_kl the sum of rho over all pairs of a unit of k and one of l.
 *
 * `field[net * blocks + b]` is the sum of rho between the units of a net and those of block b. A trial exchange reads four of its entries;
 * an accepted one sweeps once over the blocks and updates the fields of two nets.
 */
export function mismatchTerm(deal: Deal, correlation: Correlation): CostTerm {
  return new MismatchTerm(deal, correlation);
}

class MismatchTerm implements CostTerm {
  readonly name = 'mismatch';
  readonly #deal: Deal;
  readonly #blocks: number;
  /** [rows apart * columns + columns apart], whole multiples of 1 / GRAIN. */
  readonly #rho: Float64Array;
  /** Row and column of every cell in `cells`. */
  readonly #row: Int32Array;
  readonly #column: Int32Array;
  /** [block]: how often a symmetric block counts its first cell and that cell's reflection (2: a pair, 1: the centre); 0: not symmetric. */
  readonly #symmetry: Uint8Array;
  /** [net]: w / W, 0 without weight. */
  readonly #share: Float64Array;
  /** [net]: how often the net's variance counts. */
  readonly #count: Float64Array;
  /** [net]: 1 for a bit. */
  readonly #isBit: Uint8Array;
  readonly #field: Float64Array;
  /** [block]: field of all bits together. */
  readonly #all: Float64Array;
  /** [block]: sum of rho over all ordered pairs of its own units. */
  readonly #own: Float64Array;
  /** [block]: what the exchange under way adds to the field of the one net and takes from the other's. */
  readonly #moved: Float64Array;
  /** [net]: C_kk and C_kS. */
  readonly #self: Float64Array;
  readonly #withAll: Float64Array;
  #allSelf = 0;
  #sum = 0;

  constructor(deal: Deal, correlation: Correlation) {
    const { rows, columns, nets, weight, start, cells, netOfBlock } = deal;
    this.#deal = deal;
    const blocks = (this.#blocks = netOfBlock.length);
    this.#rho = correlation.at.map((rho) => Math.round(rho * GRAIN));
    this.#row = Int32Array.from(cells, (cell) => Math.floor(cell / columns));
    this.#column = Int32Array.from(cells, (cell) => cell % columns);
    this.#symmetry = Uint8Array.from({ length: blocks }, (_, b) => {
      const mirrored = rows * columns - 1 - cells[start[b]];
      const size = start[b + 1] - start[b];
      return size <= 2 && cells[start[b + 1] - 1] === mirrored ? size : 0;
    });
    const total = weight.reduce((sum, w) => sum + w, 0);
    this.#share = weight.map((w) => (total > 0 ? w / total : 0));
    const largest = weight.reduce((a, b) => Math.max(a, b), 0);
    this.#count = weight.map((w) => (w > 0 && w === largest ? LARGEST : 1));
    this.#isBit = Uint8Array.from(weight, (w) => (w > 0 ? 1 : 0));
    this.#field = new Float64Array(nets * blocks);
    this.#all = new Float64Array(blocks);
    this.#own = new Float64Array(blocks);
    this.#moved = new Float64Array(blocks);
    this.#self = new Float64Array(nets);
    this.#withAll = new Float64Array(nets);
    for (let a = 0; a < blocks; a++) {
      this.#moved.fill(0);
      this.#sweep(a, 1);
      const p = netOfBlock[a] * blocks;
      for (let b = 0; b < blocks; b++) this.#field[p + b] += this.#moved[b];
      if (this.#isBit[netOfBlock[a]]) for (let b = 0; b < blocks; b++) this.#all[b] += this.#moved[b];
      this.#own[a] = this.#moved[a];
    }
    for (let b = 0; b < blocks; b++) {
      const net = netOfBlock[b];
      if (!this.#isBit[net]) continue;
      this.#self[net] += this.#field[net * blocks + b];
      this.#withAll[net] += this.#all[b];
      this.#allSelf += this.#all[b];
    }
    this.#measure();
  }

  value(): number {
    return UNIT * Math.sqrt(this.#sum);
  }

  delta(a: number, b: number): number {
    const { netOfBlock } = this.#deal;
    const netA = netOfBlock[a];
    const netB = netOfBlock[b];
    if (netA === netB) return 0;
    const sum = this.#sum + this.#change(a, b, netA, netB);
    return UNIT * (Math.sqrt(sum > 0 ? sum : 0) - Math.sqrt(this.#sum));
  }

  apply(a: number, b: number): void {
    const { netOfBlock, nets } = this.#deal;
    const netA = netOfBlock[a];
    const netB = netOfBlock[b];
    if (netA === netB) return;
    const blocks = this.#blocks;
    const field = this.#field;
    const all = this.#all;
    const moved = this.#moved;
    const p = netA * blocks;
    const q = netB * blocks;
    const bits = this.#isBit[netA] - this.#isBit[netB];
    moved.fill(0);
    this.#sweep(b, 1);
    this.#sweep(a, -1);
    const within = moved[b] - moved[a];
    // Of the nets that exchange: their own covariances first, from the fields as they were.
    if (this.#isBit[netA]) {
      this.#self[netA] += 2 * (field[p + b] - field[p + a]) + within;
      this.#withAll[netA] += all[b] - all[a];
    }
    if (this.#isBit[netB]) {
      this.#self[netB] += 2 * (field[q + a] - field[q + b]) + within;
      this.#withAll[netB] += all[a] - all[b];
    }
    if (bits !== 0) {
      this.#allSelf += 2 * bits * (all[b] - all[a]) + within;
      for (let net = 0; net < nets; net++)
        if (this.#isBit[net]) this.#withAll[net] += bits * (field[net * blocks + b] - field[net * blocks + a]);
      // The bit has moved as well as all bits: what it brings meets itself.
      this.#withAll[bits > 0 ? netA : netB] += within;
      for (let c = 0; c < blocks; c++) all[c] += bits * moved[c];
    }
    for (let c = 0; c < blocks; c++) {
      field[p + c] += moved[c];
      field[q + c] -= moved[c];
    }
    this.#measure();
  }

  #change(a: number, b: number, netA: number, netB: number): number {
    const blocks = this.#blocks;
    const field = this.#field;
    const isBit = this.#isBit;
    const share = this.#share;
    const count = this.#count;
    // C_AA with block a gone and b come: 2 (sum over b - sum over a) - 2 rho(a, b) + rho(a, a) + rho(b, b).
    const within = this.#own[a] + this.#own[b] - 2 * this.#between(a, b);
    const selfA = 2 * (field[netA * blocks + b] - field[netA * blocks + a]) + within;
    const selfB = 2 * (field[netB * blocks + a] - field[netB * blocks + b]) + within;
    const all = this.#all[b] - this.#all[a];
    if (isBit[netA] && isBit[netB])
      return count[netA] * (selfA - 2 * share[netA] * all) + count[netB] * (selfB + 2 * share[netB] * all);
    if (!isBit[netA] && !isBit[netB]) return 0;
    // A bit exchanges with the fill: all bits together gain what the bit gains.
    const sign = isBit[netA] ? 1 : -1;
    const bit = isBit[netA] ? netA : netB;
    const allSelf = this.#allSelf + 2 * sign * all + within;
    let sum = 0;
    for (let net = 0; net < share.length; net++) {
      if (!isBit[net]) continue;
      const u = share[net];
      const moved = sign * (field[net * blocks + b] - field[net * blocks + a]);
      const self = this.#self[net] + (net !== bit ? 0 : sign > 0 ? selfA : selfB);
      const withAll = this.#withAll[net] + moved + (net === bit ? sign * all + within : 0);
      sum += count[net] * (self - 2 * u * withAll + u * u * allSelf);
    }
    return sum - this.#sum;
  }

  #measure(): void {
    let sum = 0;
    for (let net = 0; net < this.#share.length; net++) {
      if (!this.#isBit[net]) continue;
      const u = this.#share[net];
      sum += this.#count[net] * (this.#self[net] - 2 * u * this.#withAll[net] + u * u * this.#allSelf);
    }
    this.#sum = sum > 0 ? sum : 0;
  }

  /** Adds `sign` times the sum of rho between block a and every block to `moved`. */
  #sweep(a: number, sign: number): void {
    const { rows, columns, start } = this.#deal;
    const rho = this.#rho;
    const moved = this.#moved;
    const symmetry = this.#symmetry;
    if (symmetry[a] === 0) {
      for (let c = 0; c < moved.length; c++) moved[c] += sign * this.#between(a, c);
      return;
    }
    const i = start[a];
    const y = this.#row[i];
    const x = this.#column[i];
    const mirrorY = rows - 1 - y;
    const mirrorX = columns - 1 - x;
    const times = sign * symmetry[a];
    for (let c = 0; c < moved.length; c++) {
      if (symmetry[c] === 0) {
        moved[c] += sign * this.#between(a, c);
        continue;
      }
      const j = start[c];
      const row = this.#row[j];
      const column = this.#column[j];
      // A pair with a pair: two pairs of cells at either distance. With the centre both distances are one.
      const near = rho[Math.abs(y - row) * columns + Math.abs(x - column)];
      const far = rho[Math.abs(mirrorY - row) * columns + Math.abs(mirrorX - column)];
      moved[c] += 0.5 * times * symmetry[c] * (near + far);
    }
  }

  /** Sum of rho over all pairs of a unit of one block and one of the other. */
  #between(a: number, b: number): number {
    const { start, columns } = this.#deal;
    let sum = 0;
    for (let i = start[a]; i < start[a + 1]; i++)
      for (let j = start[b]; j < start[b + 1]; j++)
        sum += this.#rho[Math.abs(this.#row[i] - this.#row[j]) * columns + Math.abs(this.#column[i] - this.#column[j])];
    return sum;
  }
}
