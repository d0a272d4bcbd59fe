import type { Residuals } from './residuals.js';

/** The sum of the bits that are on in `code`. */
const sumOf = (values: readonly bigint[], code: bigint): bigint =>
  values.reduce((sum, value, k) => ((code >> BigInt(k)) & 1n ? sum + value : sum), 0n);

/**
 * The direction, in degrees from the x axis, counter-clockwise, 0 to 180, of the gradient that the code feels most: along
 * its residual.
 *
 * @param residuals in lengths, the code's first-order residual not 0.
 */
export function worstDirection({ x, y }: Residuals, code: bigint): number {
  const [dx, dy] = [sumOf(x, code), sumOf(y, code)];
  const down = dy < 0n || (dy === 0n && dx < 0n);
  const angle = Math.atan2(Number(down ? -dy : dy), Number(down ? -dx : dx));
  return (angle * 180) / Math.PI;
}

/**
 * The quadratic gradient of spectral norm 1 that the code feels most: the matrix of the signs of its residual's eigenvalues,
 * the first non-zero entry positive. Eigenvalues of one sign (the trace is the norm): the identity. Of both: what is left
 * without the trace, made a reflection.
 *
 * @param residuals in areas, the code's second-order residual not 0.
 */
export function worstShape({ xx, xy, yy }: Residuals, code: bigint): { xx: number; xy: number; yy: number } {
  const [bxx, bxy, byy] = [sumOf(xx, code), sumOf(xy, code), sumOf(yy, code)];
  const difference = bxx - byy;
  const cross = 2n * bxy;
  const shear2 = difference * difference + cross * cross;
  if ((bxx + byy) * (bxx + byy) >= shear2) return { xx: 1, xy: 0, yy: 1 };
  const flip = difference < 0n || (difference === 0n && cross < 0n);
  const size = Math.sqrt(Number(shear2));
  const diagonal = difference === 0n ? 0 : Number(flip ? -difference : difference) / size;
  const off = Number(flip ? -cross : cross) / size;
  return { xx: diagonal, xy: off, yy: diagonal === 0 ? 0 : -diagonal };
}
