import { exp, ln } from '../core/exponential.js';
import type { Random } from '../core/random.js';

/** Correlation between columns, and what it costs in (column, net) pairs. */
export interface Dispersion {
  /** [class * classes + class]: sum of the correlations of a pair in the one class with a pair in the other. */
  readonly kernel: Float64Array;
  /** Of 1 LSB of sigma INL, the root mean square over all codes, per sigma of a unit. */
  readonly price: number;
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
  readonly random: Random;
}

const LEVELS = 100;
const HOTTEST = 4;
const COLDEST = 0.02;
const MOVES_PER_ENTRY = 5000;

/**
 * How many pairs of each net to put into each class of columns, so that few columns hold a net while the second moment across the
 * columns stays near what the weights ask for. Every (column, net) pair costs 1; the moment costs `price` times half the sum of the nets'
 * residuals, over the mean moment of one unit (what the LSB at the centre lacks anyhow).
 *
 * Random mismatch, where it counts, costs the root of 1/4 sum_k q_k' K q_k, q_k = the net's pairs by class minus its share of all pairs, K
 * the correlation between classes: that of a placement whose columns have each net's cells evenly spread.
 *
 * Annealed on the table of quotas itself, where a whole lot of a net changes places with as much of another in one move; where in their
 * columns the cells stand is left to the search.
 *
 * @returns [net * classes + class].
 */
export function columnQuotas(request: ColumnQuotaRequest): Int32Array {
  const { capacity, width, square, pairs, weight, present, random } = request;
  const classes = capacity.length;
  const nets = pairs.length;
  const fill = nets - 1;
  const total = weight.reduce((sum, w) => sum + w, 0);
  const quota = firstQuotas(capacity, pairs);
  const moment = Float64Array.from(request.moment);
  for (let net = 0; net < nets; net++) {
    for (let c = 0; c < classes; c++) moment[net] += 2 * quota[net * classes + c] * square[c];
  }
  const holds = (net: number, c: number): number => {
    if (net === fill) return 0;
    const i = net * classes + c;
    return quota[i] > 0 ? width[c] : present[i];
  };
  const residue = (): number => {
    let sum = 0;
    let bits = 0;
    for (let net = 0; net < nets; net++) if (weight[net] > 0) bits += moment[net];
    for (let net = 0; net < nets; net++)
      if (weight[net] > 0) sum += Math.abs(moment[net] - (weight[net] / total) * bits);
    return bits > 0 ? (request.price * sum * total) / (2 * bits) : 0;
  };
  const move = (p: number, c: number, q: number, d: number, count: number): void => {
    quota[p * classes + c] -= count;
    quota[p * classes + d] += count;
    quota[q * classes + d] -= count;
    quota[q * classes + c] += count;
    const shift = 2 * count * (square[d] - square[c]);
    moment[p] += shift;
    moment[q] -= shift;
  };
  const kernel = request.dispersion?.kernel;
  const sigmaPrice = request.dispersion?.price ?? 0;
  // field[net * classes + c] = (K q_net)_c; the fill disturbs nobody.
  const field = new Float64Array(nets * classes);
  const addToField = (net: number, c: number, count: number): void => {
    if (kernel === undefined || net === fill) return;
    for (let d = 0; d < classes; d++) field[net * classes + d] += count * kernel[c * classes + d];
  };
  // The largest bit counts three times, as in the search that follows.
  const largest = weight.reduce((a, b) => Math.max(a, b), 0);
  const times = weight.map((w) => (w > 0 && w === largest ? 3 : 1));
  let variance = 0;
  for (let net = 0; net < fill; net++) {
    if (weight[net] === 0) continue;
    const pairsOff = (c: number) => quota[net * classes + c] - (weight[net] / total) * capacity[c];
    for (let c = 0; c < classes; c++) addToField(net, c, pairsOff(c));
    for (let c = 0; c < classes; c++) variance += times[net] * pairsOff(c) * field[net * classes + c];
  }
  /** What the variance changes by if `count` pairs of a net go from class c to class d. */
  const varianceOf = (net: number, c: number, d: number, count: number): number => {
    if (kernel === undefined || net === fill || weight[net] === 0) return 0;
    const within = kernel[c * classes + c] + kernel[d * classes + d] - 2 * kernel[c * classes + d];
    return times[net] * count * (2 * (field[net * classes + d] - field[net * classes + c]) + count * within);
  };
  const sigma = (v: number): number => sigmaPrice * 0.5 * Math.sqrt(v > 0 ? v : 0);
  const around = (p: number, c: number, q: number, d: number): number =>
    holds(p, c) + holds(p, d) + holds(q, c) + holds(q, d);

  let least = Infinity;
  let best = quota.slice();
  let columnNets = 0;
  for (let net = 0; net < nets; net++) for (let c = 0; c < classes; c++) columnNets += holds(net, c);
  let spread = residue();
  const cooling = exp(ln(COLDEST / HOTTEST) / (LEVELS - 1));
  const moves = Math.ceil((MOVES_PER_ENTRY * nets * classes) / LEVELS);
  let temperature = HOTTEST;
  for (let level = 0; level < LEVELS; level++) {
    for (let n = 0; n < moves; n++) {
      const p = random.below(nets);
      const q = random.below(nets);
      const c = random.below(classes);
      const d = random.below(classes);
      const most = Math.min(quota[p * classes + c], quota[q * classes + d]);
      if (p === q || c === d || most === 0) continue;
      const count = random.below(2) === 0 ? most : 1 + random.below(most);
      const before = around(p, c, q, d);
      const moved = varianceOf(p, c, d, count) + varianceOf(q, d, c, count);
      move(p, c, q, d, count);
      const change = around(p, c, q, d) - before;
      const now = residue();
      const more = change + now - spread + sigma(variance + moved) - sigma(variance);
      if (more <= 0 || more <= -temperature * ln((random.bits() + 0.5) / 0x1_0000_0000)) {
        columnNets += change;
        spread = now;
        variance += moved;
        addToField(p, c, -count);
        addToField(p, d, count);
        addToField(q, d, -count);
        addToField(q, c, count);
        const cost = columnNets + spread + sigma(variance);
        if (cost < least) {
          least = cost;
          best = quota.slice();
        }
      } else move(p, d, q, c, count);
    }
    temperature *= cooling;
  }
  return best;
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
