import type { PitchNm } from './figures.js';
import type { Residuals } from './residuals.js';
import { longestSumInPlane, longestSumOnLine } from './zonotope.js';
import type { LongestSum } from './zonotope.js';

/**
 * The largest first-order residual over all codes (for least squares: over all signs, see `Residuals`): `squared` is (2
 * scale |sum d_k a_k|)^2 with lengths in half-nanometres (a half-pitch times a pitch in nm).
 */
export function worstFirstOrder(residuals: Residuals, [px, py]: PitchNm): LongestSum {
  const { x, y } = inNanometres(residuals, [px, py]);
  return longestSumInPlane(x, y);
}

/**
 * The largest second-order residual over all codes: `squared` is (2 scale ||sum d_k B_k||_*)^2 with areas in half-nanometres
 * squared.
 *
 * The nuclear norm of a symmetric 2x2 matrix is max(|xx + yy|, sqrt((xx - yy)^2 + (2 xy)^2)), and the largest of the larger
 * of two is the larger of the two largest: sums of numbers for the trace, sums of vectors in the plane for the rest. So 2^K
 * codes need no visit.
 */
export function worstSecondOrder(residuals: Residuals, pitch: PitchNm): LongestSum {
  const { xx, xy, yy } = inNanometres(residuals, pitch);
  const trace = longestSumOnLine(xx.map((value, k) => value + yy[k]));
  const shear = longestSumInPlane(
    xx.map((value, k) => value - yy[k]),
    xy.map((value) => 2n * value),
  );
  if (trace.squared !== shear.squared) return trace.squared > shear.squared ? trace : shear;
  return trace.code < shear.code ? trace : shear;
}

/** The residuals in half-nanometres (squared), still `scale` times what they stand for. */
export function inNanometres({ scale, x, y, xx, xy, yy }: Residuals, [px, py]: PitchNm): Residuals {
  const [bx, by] = [BigInt(px), BigInt(py)];
  return {
    scale,
    x: x.map((value) => bx * value),
    y: y.map((value) => by * value),
    xx: xx.map((value) => bx * bx * value),
    xy: xy.map((value) => bx * by * value),
    yy: yy.map((value) => by * by * value),
  };
}
