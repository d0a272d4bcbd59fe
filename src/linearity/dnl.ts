import { PPM } from './figures.js';
import { ownError } from './own-gradient.js';
import type { OwnGradient } from './own-gradient.js';
import type { Residuals } from './residuals.js';
import { visitSteps } from './steps.js';

/** LSB under 1 ppm/um, 1 ppm/um^2, and the own gradient (0 without one). */
interface LargestSteps {
  readonly first: number;
  readonly second: number;
  readonly own: number;
}

/**
 * The largest DNL of each figure, over the steps of `visitSteps`.
 *
 * The residuals enter in half-pitches, `scale` times over: whole numbers, at most 2 W * units * columns^2 and so below 2^53 for 16,383 units on
 * cores of up to 4,000 columns or rows. Their sums and differences are exact in doubles, and what is 0 comes out as 0.
 *
 * @param residuals of the end-point fit. @param half half a pitch in um.
 * @returns undefined beyond 14 capacitors that are not straight binary.
 */
export function largestSteps(
  weight: readonly number[],
  residuals: Residuals,
  [hx, hy]: readonly [x: number, y: number],
  own: OwnGradient | undefined,
): LargestSteps | undefined {
  const steps = (['x', 'y', 'xx', 'xy', 'yy'] as const).map((sum) => residuals[sum].map(Number));
  let first2 = 0;
  let second2 = 0;
  let ownMost = 0;
  const visited = visitSteps(weight, steps, (x, y, xx, xy, yy) => {
    const [ax, ay] = [hx * x, hy * y];
    const length2 = ax * ax + ay * ay;
    if (length2 > first2) first2 = length2;
    const [bxx, bxy, byy] = [hx * hx * xx, hx * hy * xy, hy * hy * yy];
    const trace2 = (bxx + byy) * (bxx + byy);
    const shear2 = (bxx - byy) * (bxx - byy) + 4 * bxy * bxy;
    if (trace2 > second2) second2 = trace2;
    if (shear2 > second2) second2 = shear2;
    if (own) ownMost = Math.max(ownMost, ownError(own, ax, ay, bxx, bxy, byy));
  });
  if (!visited) return undefined;
  const lsb = PPM / Number(residuals.scale);
  return { first: lsb * Math.sqrt(first2), second: lsb * Math.sqrt(second2), own: lsb * ownMost };
}
