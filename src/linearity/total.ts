import type { Gradient } from '../spec/technology.js';
import { bitsOf, unitsUnder } from './expected-units.js';
import type { MismatchAnalysis, Placed } from './mismatch.js';
import { ownGradient } from './own-gradient.js';
import { eachStep } from './worst-variance.js';

interface TotalInput extends Placed {
  readonly gradient: Gradient;
  /** What each bit has in capacitance to the common plate beyond its units, in units. */
  readonly coupling: ReadonlyMap<string, number>;
  /** Of the same placement. */
  readonly mismatch: MismatchAnalysis;
}

/** LSB; `dnl` absent beyond 14 capacitors that are not straight binary. */
export interface TotalFigures {
  readonly inl3Sigma_lsb: number;
  readonly dnl3Sigma_lsb?: number;
}

/**
 * All errors of an array together: over all codes D the largest |INL(D)| + 3 sigma(D), and the same of the steps of DNL.
 *
 * INL(D) is the end-point formula without approximation, W (sum d_k c_k) / (sum c_k) - sum d_k w_k, with c_k = units under the expected
 * gradient + coupling. sigma(D) is that of random mismatch at the same code. Where the gradient has no direction every code takes its worst:
 * with c_k = s_k + u.q_k for a slope along u, S = sum s_k, t = sum q_k, r_k = W s_k / S - w_k and e_k = W (q_k - s_k t / S),
 *
 *     INL(D) = sum d_k r_k + u.e / (S + u.t)      with e = sum d_k e_k
 *
 * and the second term is m where u.(e - m t) = m S, at most and at least where |e - m t| = +-m S: a quadratic equation in m.
 *
 * Largest errors at one code need not meet in one array: an estimate, no guarantee.
 */
export function totalFigures({ core, capacitors, cells, gradient, coupling, mismatch }: TotalInput): TotalFigures {
  const bits = bitsOf(capacitors);
  const weight = bits.map((bit) => bit.weight);
  const own = ownGradient(gradient);
  const expected = unitsUnder(own, { core, cells }, bits);
  const flat = bits.map(({ name }, k) => expected.flat[k] + (coupling.get(name) ?? 0));
  const slope = [expected.x, expected.y];
  const sum = (values: readonly number[]) => values.reduce((all, value) => all + value, 0);
  const [W, S] = [sum(weight), sum(flat)];
  const [tx, ty] = slope.map(sum);
  const r = flat.map((s, k) => (W * s) / S - weight[k]);
  const ex = slope[0].map((q, k) => W * (q - (flat[k] * tx) / S));
  const ey = slope[1].map((q, k) => W * (q - (flat[k] * ty) / S));

  const { direction } = own;
  const sharp = S * S - tx * tx - ty * ty;
  /** The largest |INL| of a sum of bits. */
  const error = (r: number, x: number, y: number): number => {
    if (direction)
      return Math.abs(r + (direction[0] * x + direction[1] * y) / (S + direction[0] * tx + direction[1] * ty));
    const across = x * tx + y * ty;
    const reach = Math.sqrt(across * across + sharp * (x * x + y * y));
    return Math.max(Math.abs(r + (reach - across) / sharp), Math.abs(r - (reach + across) / sharp));
  };
  const errors = [r, ex, ey];
  const total = (sums: readonly number[], variance: number): number =>
    error(sums[0], sums[1], sums[2]) + 3 * Math.sqrt(Math.max(0, variance));

  let step = 0;
  let tables: readonly Float64Array[] | undefined;
  const hasSteps = eachStep(weight, mismatch.endPoint, (from, to, variance) => {
    tables ??= errors.map(sumsOfSubsets);
    step = Math.max(
      step,
      total(
        tables.map((sums) => sums[to] - sums[from]),
        variance,
      ),
    );
  });
  return {
    inl3Sigma_lsb: largestOverSubsets(errors, mismatch.endPoint, total),
    ...(hasSteps && { dnl3Sigma_lsb: step }),
  };
}

/** The sum of the values of every subset, value k being in those with bit k set. */
function sumsOfSubsets(values: readonly number[]): Float64Array {
  const sums = new Float64Array(1 << values.length);
  for (let set = 1; set < sums.length; set++) sums[set] = sums[set & (set - 1)] + values[31 - Math.clz32(set & -set)];
  return sums;
}

/**
 * The largest value over all subsets d of bits, from the sums of each list over d and from d'Md: in Gray code, one bit on or off a step. A
 * subset and its complement have the same, since every list adds up to 0 and so do the rows of M; so the last bit stays off.
 */
function largestOverSubsets(
  lists: readonly (readonly number[])[],
  matrix: readonly Float64Array[],
  value: (sums: readonly number[], form: number) => number,
): number {
  const count = matrix.length;
  const on = new Float64Array(count);
  const sums = lists.map(() => 0);
  // along[k] = sum_l M_kl d_l
  const along = new Float64Array(count);
  let form = 0;
  let most = 0;
  for (let step = 1; step < 1 << (count - 1); step++) {
    const k = 31 - Math.clz32(step & -step);
    const row = matrix[k];
    const change = 1 - 2 * on[k];
    on[k] += change;
    form += change * (2 * along[k] + change * row[k]);
    for (let l = 0; l < count; l++) along[l] += change * row[l];
    for (let i = 0; i < lists.length; i++) sums[i] += change * lists[i][k];
    most = Math.max(most, value(sums, form));
  }
  return most;
}
