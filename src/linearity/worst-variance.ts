import { stepsOf } from './steps.js';

/** A symmetric matrix, row by row. */
type Matrix = readonly Float64Array[];

const form = (matrix: Matrix, vector: ArrayLike<number>): number =>
  matrix.reduce((sum, row, k) => sum + vector[k] * row.reduce((inner, entry, l) => inner + entry * vector[l], 0), 0);

/**
 * The largest s'Ms / 4 over all signs s_k = +-1, exactly: all of them in Gray code, one sign a step, so that a step costs as many additions
 * as there are capacitors. s and -s give the same, so the last sign stays.
 */
export function worstOverSigns(matrix: Matrix): number {
  const count = matrix.length;
  const signs = new Float64Array(count).fill(1);
  // along[k] = sum_l M_kl s_l
  const along = Float64Array.from(matrix, (row) => row.reduce((sum, entry) => sum + entry, 0));
  let value = form(matrix, signs);
  let most = value;
  let worst = signs.slice();
  const steps = count > 1 ? 1 << (count - 1) : 1;
  for (let step = 1; step < steps; step++) {
    const k = 31 - Math.clz32(step & -step);
    const row = matrix[k];
    const change = -2 * signs[k];
    value += change * (2 * along[k] + change * row[k]);
    signs[k] = -signs[k];
    for (let l = 0; l < count; l++) along[l] += change * row[l];
    if (value > most) {
      most = value;
      worst = signs.slice();
    }
  }
  // Anew, without what half a million additions have rounded.
  return form(matrix, worst) / 4;
}

/** Called for a step from subset `from` of the bits to subset `to`, bit k being 1 << k, with the variance of the difference. */
type StepVisit = (from: number, to: number, variance: number) => void;

/**
 * The largest v'Mv over the steps v between neighbouring nominal levels (see `stepsOf`).
 * @returns undefined where there are no steps.
 */
export function worstOverSteps(weight: readonly number[], matrix: Matrix): number | undefined {
  let most = 0;
  const some = eachStep(weight, matrix, (_, __, variance) => {
    if (variance > most) most = variance;
  });
  return some ? most : undefined;
}

/**
 * Visits every step v between neighbouring nominal levels (see `stepsOf`), with v'Mv.
 * @returns false where there are no steps.
 */
export function eachStep(weight: readonly number[], matrix: Matrix, visit: StepVisit): boolean {
  const count = weight.length;
  const units = weight.map((_, k) => weight.map((__, l) => (k === l ? 1 : 0)));
  const steps = stepsOf(weight, units);
  if (!steps) return false;
  const { points, groups } = steps;
  // (b - a)'M(b - a) = a'Ma + b'Mb - 2 a'Mb, and a has nothing but zeros and ones.
  const on = Int32Array.from(points[0], (_, p) => points.reduce((set, point, k) => set | (point[p] << k), 0));
  const own = Float64Array.from(on, (_, p) =>
    form(
      matrix,
      points.map((point) => point[p]),
    ),
  );
  // Sums of M b over the lower half of a subset's capacitors, and over the upper half.
  const half = count >> 1;
  const low = new Float64Array(1 << half);
  const high = new Float64Array(1 << (count - half));
  const lowest = (1 << half) - 1;
  for (let group = 0; group < groups.length; group += 4) {
    for (let b = groups[group + 2]; b < groups[group + 3]; b++) {
      const across = matrix.map((row) => row.reduce((sum, entry, k) => sum + entry * points[k][b], 0));
      fillSums(low, across, 0);
      fillSums(high, across, half);
      for (let a = groups[group]; a < groups[group + 1]; a++)
        visit(on[a], on[b], own[a] + own[b] - 2 * (low[on[a] & lowest] + high[on[a] >> half]));
    }
  }
  return true;
}

/** sums[set] = sum of `values` over the members of the set, counted from `first`. */
function fillSums(sums: Float64Array, values: readonly number[], first: number): void {
  for (let set = 1; set < sums.length; set++)
    sums[set] = sums[set & (set - 1)] + values[first + 31 - Math.clz32(set & -set)];
}
