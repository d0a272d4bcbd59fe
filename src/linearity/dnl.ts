import { PPM } from './figures.js';
import { ownError } from './own-gradient.js';
import type { OwnGradient } from './own-gradient.js';
import type { Residuals } from './residuals.js';
import { stepsOf } from './steps.js';

/** LSB under 1 ppm/um, 1 ppm/um^2, and the own gradient (0 without one). */
interface LargestSteps {
  readonly first: number;
  readonly second: number;
  readonly own: number;
}

/**
 * The largest DNL of each figure, over the steps of `stepsOf`.
 *
 * The residuals enter in half-pitches, `scale` times over: whole numbers, at most 2 W * units * columns^2 and so below 2^53
 * for 16,383 units on cores of up to 4,000 columns or rows. Their sums and differences are exact in doubles, and what is 0
 * comes out as 0.
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
  const vectors = (['x', 'y', 'xx', 'xy', 'yy'] as const).map((sum) => residuals[sum].map(Number));
  const steps = stepsOf(weight, vectors);
  if (!steps) return undefined;
  const {
    points: [x, y, xx, xy, yy],
    groups,
  } = steps;
  let first2 = 0;
  let second2 = 0;
  let ownMost = 0;
  for (let group = 0; group < groups.length; group += 4) {
    for (let a = groups[group]; a < groups[group + 1]; a++) {
      for (let b = groups[group + 2]; b < groups[group + 3]; b++) {
        const ax = hx * (x[b] - x[a]);
        const ay = hy * (y[b] - y[a]);
        const length2 = ax * ax + ay * ay;
        if (length2 > first2) first2 = length2;
        const bxx = hx * hx * (xx[b] - xx[a]);
        const bxy = hx * hy * (xy[b] - xy[a]);
        const byy = hy * hy * (yy[b] - yy[a]);
        const trace = bxx + byy;
        const difference = bxx - byy;
        const shear2 = difference * difference + 4 * bxy * bxy;
        if (trace * trace > second2) second2 = trace * trace;
        if (shear2 > second2) second2 = shear2;
        if (!own) continue;
        const error = ownError(own, ax, ay, bxx, bxy, byy);
        if (error > ownMost) ownMost = error;
      }
    }
  }
  const lsb = PPM / Number(residuals.scale);
  return { first: lsb * Math.sqrt(first2), second: lsb * Math.sqrt(second2), own: lsb * ownMost };
}
