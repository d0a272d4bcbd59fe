import type { Covariances } from './mismatch.js';
import { levelSubsets } from './transitions.js';

/** Sigma (LSB) at every nominal level, from random mismatch alone. */
export interface SigmaCurves {
  readonly level: Int32Array;
  /** From the line through both ends, and from the least-squares line. */
  readonly inl: Float64Array;
  readonly inlLeastSquares: Float64Array;
  /** Of the step up to each level; NaN at the first, which none leads to. */
  readonly dnl: Float64Array;
}

/**
 * Sigma of INL and DNL code by code: each level with the bits that a conversion has on there (`levelSubsets`; of straight binary weights
 * every code).
 * @param weight ascending
 */
export function sigmaCurves(weight: readonly number[], { endPoint, leastSquares }: Covariances): SigmaCurves {
  const { level, subset } = levelSubsets(weight);
  const all = (1 << weight.length) - 1;
  const signed = (of: (k: number, set: number) => number, set: number): Float64Array =>
    Float64Array.from(weight, (_, k) => of(k, set));
  const on = (k: number, set: number): number => (set >> k) & 1;
  // The least-squares line meets the mean of all codes, where every bit is half on (see `Residuals`).
  const halved = (k: number, set: number): number => on(k, set) - 0.5;
  return {
    level,
    // The line goes through both ends: with all bits on nothing is left, whatever rounding says.
    inl: Float64Array.from(subset, (set) => (set === all ? 0 : sigma(endPoint, signed(on, set)))),
    inlLeastSquares: Float64Array.from(subset, (set) => sigma(leastSquares, signed(halved, set))),
    dnl: Float64Array.from(subset, (set, i) =>
      i === 0
        ? NaN
        : sigma(
            endPoint,
            signed((k) => on(k, set) - on(k, subset[i - 1]), set),
          ),
    ),
  };
}

/** The root of v'Mv; what rounding leaves below 0 is 0. */
function sigma(matrix: readonly Float64Array[], vector: Float64Array): number {
  let form = 0;
  for (let k = 0; k < vector.length; k++) {
    const row = matrix[k];
    let along = 0;
    for (let l = 0; l < vector.length; l++) along += row[l] * vector[l];
    form += vector[k] * along;
  }
  return Math.sqrt(Math.max(0, form));
}
