import { normal, normalAbove, normalTail } from '../core/normal.js';
import { Random } from '../core/random.js';
import type { Limits } from '../spec/converter.js';
import { lowerFactor } from './covariance-factor.js';
import { levelSteps } from './transitions.js';

/** Every subset of the bits is looked at for every draw. */
export const MOST_BITS = 14;

/** The share of arrays that miss a limit, and the interval that holds it. */
interface Lost {
  readonly share: number;
  readonly low: number;
  readonly high: number;
}

/**
 * The share of arrays beyond the limits where it is too small to count: to first order in the random part, a limit on one code or step is a
 * half-space of the normal numbers, and an array is lost in the union of all of them. A half-space i is drawn by its own probability P_i,
 * a point inside it, and how many half-spaces S hold the point; the mean of 1 / S times sum P_i is the share lost, without bias, and each
 * draw between sum P_i / (their number) and sum P_i: no weight can run away (Owen, Maximov, Chertkov, Electron. J. Statist. 13, 2019; from
 * memory). The interval is that of a mean of many, +-1.96 standard errors, and never leaves the bounds largest P_i and sum P_i.
 *
 * @param weight ascending, at most 14 bits. @param mean capacitance of each bit, in units. @param covariance units^2
 */
export function lostShare(
  weight: readonly number[],
  mean: readonly number[],
  covariance: readonly Float64Array[],
  { inl_lsb = Infinity, dnl_lsb = Infinity }: Limits,
  draws: number,
  seed: number,
): Lost {
  const bits = weight.length;
  const W = weight.reduce((sum, w) => sum + w, 0);
  const all = mean.reduce((sum, c) => sum + c, 0);
  const shift = mean.map((c, k) => (c * W) / all - weight[k]);
  // Errors besides gain: row k of `spread` times the normal numbers, on top of shift k.
  const factor = lowerFactor(covariance);
  const rows = weight.map((_, k) =>
    Float64Array.from({ length: bits }, (__, l) => (l <= k ? factor[(k * (k + 1)) / 2 + l] : 0)),
  );
  const common = Float64Array.from({ length: bits }, (_, l) => rows.reduce((sum, row) => sum + row[l], 0));
  const spread = rows.map((row, k) => row.map((value, l) => (W / all) * (value - (mean[k] * common[l]) / all)));

  const spaces = halfSpaces({ weight, shift, spread, inl_lsb, dnl_lsb });
  const { probability, direction } = spaces;
  const chances = probability.reduce((sum, p) => sum + p, 0);
  const largest = probability.reduce((a, b) => Math.max(a, b), 0);
  if (chances === 0) return { share: 0, low: 0, high: 0 };
  const upTo = new Float64Array(probability.length);
  probability.reduce((sum, p, i) => (upTo[i] = sum + p), 0);

  const random = new Random(seed, 1);
  const point = new Float64Array(bits);
  const error = new Float64Array(bits);
  const sums = new Float64Array(1 << bits);
  const steps = levelSteps(weight);
  let total = 0;
  let squares = 0;
  for (let draw = 0; draw < draws; draw++) {
    const i = firstAbove(upTo, random.unit() * chances);
    const along = direction(i);
    for (let l = 0; l < bits; l++) point[l] = normal(random);
    const missing = normalAbove(spaces.distance[i], random) - dot(along, point);
    for (let l = 0; l < bits; l++) point[l] += missing * along[l];
    for (let k = 0; k < bits; k++) error[k] = shift[k] + dot(spread[k], point);
    // The point is in its own half-space, whatever rounding says.
    const holders = Math.max(1, countBeyond(error, sums, steps, inl_lsb, dnl_lsb));
    total += 1 / holders;
    squares += 1 / (holders * holders);
  }
  const average = total / draws;
  const deviation = Math.sqrt(Math.max(0, squares / draws - average * average) / draws);
  const within = (share: number) => Math.min(chances, 1, Math.max(largest, share));
  return {
    share: within(chances * average),
    low: within(chances * (average - 1.96 * deviation)),
    high: within(chances * (average + 1.96 * deviation)),
  };
}

const dot = (a: ArrayLike<number>, b: ArrayLike<number>): number => {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
};

interface Errors {
  readonly weight: readonly number[];
  readonly shift: readonly number[];
  readonly spread: readonly Float64Array[];
  readonly inl_lsb: number;
  readonly dnl_lsb: number;
}

/** Where a limit is missed: on the far side of a plane at `distance` from 0 along `direction`. */
interface HalfSpaces {
  readonly probability: readonly number[];
  readonly distance: readonly number[];
  readonly direction: (i: number) => Float64Array;
}

/**
 * One for each subset of bits: with its complement it is the two ends of one code's INL, since the errors add up to 0. Two for each step.
 * What the random part does not move is on neither side.
 */
function halfSpaces({ weight, shift, spread, inl_lsb, dnl_lsb }: Errors): HalfSpaces {
  const bits = weight.length;
  const forms: Int8Array[] = [];
  const probability: number[] = [];
  const distance: number[] = [];
  const normalOf = (form: Int8Array): Float64Array =>
    Float64Array.from({ length: bits }, (_, l) => spread.reduce((sum, row, k) => sum + form[k] * row[l], 0));
  const add = (form: Int8Array, limit: number): void => {
    const normal = normalOf(form);
    const sigma = Math.sqrt(dot(normal, normal));
    if (sigma === 0 || limit === Infinity) return;
    const away = (limit - dot(form, shift)) / sigma;
    forms.push(form);
    distance.push(away);
    probability.push(normalTail(away));
  };
  for (let set = 1; set < (1 << bits) - 1; set++)
    add(
      Int8Array.from(weight, (_, k) => (set >> k) & 1),
      inl_lsb,
    );
  for (const step of levelSteps(weight)) {
    add(step, dnl_lsb);
    add(
      step.map((sign) => -sign),
      dnl_lsb,
    );
  }
  const direction = (i: number): Float64Array => {
    const normal = normalOf(forms[i]);
    const length = Math.sqrt(dot(normal, normal));
    return normal.map((value) => value / length);
  };
  return { probability, distance, direction };
}

/** How many half-spaces hold the array with these errors; `sums` is scratch for the sums of all subsets. */
function countBeyond(
  error: Float64Array,
  sums: Float64Array,
  steps: readonly Int8Array[],
  inl_lsb: number,
  dnl_lsb: number,
): number {
  let count = 0;
  if (inl_lsb < Infinity)
    for (let k = 0, size = 1; k < error.length; k++, size *= 2)
      for (let set = 0; set < size; set++) if ((sums[size + set] = sums[set] + error[k]) > inl_lsb) count++;
  for (const step of steps) if (Math.abs(dot(step, error)) > dnl_lsb) count++;
  return count;
}

/** Index of the first entry of an ascending list above a value. */
function firstAbove(ascending: Float64Array, value: number): number {
  let low = 0;
  let high = ascending.length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (ascending[middle] > value) high = middle;
    else low = middle + 1;
  }
  return low;
}
