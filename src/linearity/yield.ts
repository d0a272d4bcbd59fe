import { normal } from '../core/normal.js';
import { Random } from '../core/random.js';
import type { Limits } from '../spec/converter.js';
import { lowerFactor } from './covariance-factor.js';
import { isStraightBinary } from './steps.js';
import { levelSteps } from './transitions.js';

/** Which systematic errors come on top of the random ones. */
const settings = ['all', 'randomOnly', 'withoutGradient', 'withoutWiring'] as const;
export type Setting = (typeof settings)[number];

/** The bits' capacitances on the mean in each setting, in units. */
export type Means = Readonly<Record<Setting, readonly number[]>>;

/**
 * @param weight units of each bit, by ascending weight. @param gradient what each has beyond them under the gradient, and @param wiring
 * what its wires add; in proportion to the weights it is gain.
 */
export function meansOf(weight: readonly number[], gradient: readonly number[], wiring: readonly number[]): Means {
  const none = weight.map(() => 0);
  const plus = (one: readonly number[], other: readonly number[]) => weight.map((w, k) => w + one[k] + other[k]);
  return {
    all: plus(gradient, wiring),
    randomOnly: plus(none, none),
    withoutGradient: plus(none, wiring),
    withoutWiring: plus(gradient, none),
  };
}

/**
 * How many arrays have INL and DNL within the limits over all codes, in each setting. Every setting meets the same random numbers.
 * @param covariance of random mismatch, units^2
 */
export function countWithin(
  weight: readonly number[],
  means: Means,
  covariance: readonly Float64Array[],
  { inl_lsb = Infinity, dnl_lsb = Infinity }: Limits,
  samples: number,
  seed: number,
): Readonly<Record<Setting, number>> {
  // Settings that come to the same means are counted once.
  const keys = settings.map((setting) => means[setting].join());
  const distinct = settings.filter((_, s) => keys.indexOf(keys[s]) === s);
  const counts = distinct.map(() => 0);
  const given = distinct.map((setting) => means[setting]);
  drawArrays(weight, given, covariance, samples, seed, (inl, dnl, s) => {
    if (inl <= inl_lsb && dnl <= dnl_lsb) counts[s]++;
  });
  const count = (setting: Setting): number =>
    counts[distinct.findIndex((other) => means[other].join() === means[setting].join())];
  return {
    all: count('all'),
    randomOnly: count('randomOnly'),
    withoutGradient: count('withoutGradient'),
    withoutWiring: count('withoutWiring'),
  };
}

/**
 * Draws arrays and tells the largest |INL| and |DNL| of each over all codes: as many normal numbers an array as it has bits, through the
 * factor of their covariance, not a table of 2^N codes. Both come from the capacitances without approximation:
 *
 *   e_k = c_k W / sum c - w_k,  largest |INL| = 1/2 sum |e_k|  (all subsets of bits are codes; of weights with redundancy, a bound),
 *   DNL the sum of e over each step of `levelSteps`; of straight binary weights e_k - sum of all below.
 *
 * @param means capacitances on the mean, in units: each in turn with the same random numbers
 * @param visit called for each array and each of the means by its number. Nothing is allocated between two calls.
 */
export function drawArrays(
  weight: readonly number[],
  means: readonly (readonly number[])[],
  covariance: readonly Float64Array[],
  samples: number,
  seed: number,
  visit: (inl_lsb: number, dnl_lsb: number, mean: number) => void,
): void {
  const bits = weight.length;
  const factor = lowerFactor(covariance);
  const steps = isStraightBinary(weight) ? undefined : sparse(levelSteps(weight));
  const W = weight.reduce((sum, w) => sum + w, 0);
  const capacitance = means.map((mean) => Float64Array.from(mean));
  const random = new Random(seed);
  const drawn = new Float64Array(bits);
  const delta = new Float64Array(bits);
  const error = new Float64Array(bits);
  for (let sample = 0; sample < samples; sample++) {
    for (let k = 0; k < bits; k++) drawn[k] = normal(random);
    let entry = 0;
    for (let k = 0; k < bits; k++) {
      let sum = 0;
      for (let l = 0; l <= k; l++) sum += factor[entry++] * drawn[l];
      delta[k] = sum;
    }
    for (let m = 0; m < capacitance.length; m++) {
      const mean = capacitance[m];
      let all = 0;
      for (let k = 0; k < bits; k++) all += error[k] = mean[k] + delta[k];
      const gain = W / all;
      let inl = 0;
      for (let k = 0; k < bits; k++) {
        const e = error[k] * gain - weight[k];
        error[k] = e;
        inl += e < 0 ? -e : e;
      }
      visit(0.5 * inl, steps ? largestStep(error, steps) : largestBitStep(error), m);
    }
  }
}

/** Steps as lists of bits: those that go on from start[2 s], those that go off from start[2 s + 1]. */
interface Steps {
  readonly bit: Uint8Array;
  readonly start: Int32Array;
}

function sparse(steps: readonly Int8Array[]): Steps {
  const bit: number[] = [];
  const start = [0];
  for (const step of steps)
    for (const sign of [1, -1]) {
      step.forEach((value, k) => {
        if (value === sign) bit.push(k);
      });
      start.push(bit.length);
    }
  return { bit: Uint8Array.from(bit), start: Int32Array.from(start) };
}

/** Of the step of every bit, which goes on while all below it go off. */
function largestBitStep(error: Float64Array): number {
  let below = 0;
  let most = 0;
  for (let k = 0; k < error.length; k++) {
    const dnl = error[k] - below;
    if (dnl > most) most = dnl;
    else if (-dnl > most) most = -dnl;
    below += error[k];
  }
  return most;
}

function largestStep(error: Float64Array, { bit, start }: Steps): number {
  let at = 0;
  let most = 0;
  for (let half = 1; half < start.length; half += 2) {
    let dnl = 0;
    for (const end = start[half]; at < end; at++) dnl += error[bit[at]];
    for (const end = start[half + 1]; at < end; at++) dnl -= error[bit[at]];
    if (dnl > most) most = dnl;
    else if (-dnl > most) most = -dnl;
  }
  return most;
}
