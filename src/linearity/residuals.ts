import type { Moments } from './moments.js';

/**
 * What is left of every bit's moments when gain is taken out: whole numbers, `scale` times the residual in half-pitches (squared).
 *
 * An error delta_k of bit k that is in proportion to the weights is gain and bends nothing. Each fit takes out a multiple of
 * the weights:
 *
 *   end-point      e_k = delta_k - w_k * (sum_j delta_j) / (sum_j w_j)
 *   least squares  e_k = delta_k - w_k * (sum_j w_j delta_j) / (sum_j w_j^2)
 *
 * For both, half the largest |sum_k s_k e_k| over signs s_k = +-1 is the largest |INL|. End-point: the e_k add up to 0, so
 * sum d_k e_k = 1/2 sum s_k e_k with d_k = (1 + s_k) / 2. Least squares: over all subsets d of independent bits, the line through
 * (sum d_k w_k, sum d_k delta_k) has slope cov / var = (1/4 sum w_k delta_k) / (1/4 sum w_k^2) and meets the mean, at which every
 * d_k = 1/2; the distance from it is sum (d_k - 1/2) e_k = 1/2 sum s_k e_k.
 */
export interface Residuals {
  readonly scale: bigint;
  readonly x: readonly bigint[];
  readonly y: readonly bigint[];
  readonly xx: readonly bigint[];
  readonly xy: readonly bigint[];
  readonly yy: readonly bigint[];
}

export function endPointResiduals(moments: Moments): Residuals {
  return residuals(
    moments,
    moments.weight.map(() => 1n),
  );
}

export function leastSquaresResiduals(moments: Moments): Residuals {
  return residuals(moments, moments.weight.map(BigInt));
}

/** scale S_k - w_k sum_j vote_j S_j with scale = sum_j vote_j w_j. */
function residuals(moments: Moments, vote: readonly bigint[]): Residuals {
  const weight = moments.weight.map(BigInt);
  const dot = (sums: readonly bigint[]): bigint => sums.reduce((total, sum, k) => total + vote[k] * sum, 0n);
  const scale = dot(weight);
  const of = (sums: Float64Array): bigint[] => {
    const whole = Array.from(sums, BigInt);
    const gain = dot(whole);
    return whole.map((sum, k) => scale * sum - weight[k] * gain);
  };
  return { scale, x: of(moments.x), y: of(moments.y), xx: of(moments.xx), xy: of(moments.xy), yy: of(moments.yy) };
}
