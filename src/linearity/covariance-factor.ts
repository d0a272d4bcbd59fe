/**
 * The lower triangle L of a covariance matrix C = L L' (Cholesky), row by row without the zeros: entry (k, l) at k (k + 1) / 2 + l. A
 * variance that is nothing but rounding is 0 (wholly correlated capacitors leave such), and so is its column.
 */
export function lowerFactor(covariance: readonly Float64Array[]): Float64Array {
  const count = covariance.length;
  const factor = new Float64Array((count * (count + 1)) / 2);
  const at = (k: number, l: number): number => (k * (k + 1)) / 2 + l;
  for (let l = 0; l < count; l++) {
    for (let k = l; k < count; k++) {
      let rest = covariance[k][l];
      for (let m = 0; m < l; m++) rest -= factor[at(k, m)] * factor[at(l, m)];
      if (k > l) factor[at(k, l)] = factor[at(l, l)] > 0 ? rest / factor[at(l, l)] : 0;
      else if (rest > ROUNDING * covariance[k][k]) factor[at(k, k)] = Math.sqrt(rest);
    }
  }
  return factor;
}

/** Of a variance what the sums of up to 20 products may leave. */
const ROUNDING = 1e-13;
