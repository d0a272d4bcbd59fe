import type { Gradient } from '../spec/technology.js';
import { PPM } from './figures.js';
import type { Residuals } from './residuals.js';

/** A gradient in one form: g ppm/um along (ux, uy), or along whatever direction is worst, and a bowl q ppm/um^2. */
export interface OwnGradient {
  readonly linear: number;
  readonly direction?: readonly [x: number, y: number];
  readonly xx: number;
  readonly xy: number;
  readonly yy: number;
}

/** A plain number q as the quadratic part is the bowl q (x^2 + y^2). */
export function ownGradient({
  linear_ppm_per_um = 0,
  quadratic_ppm_per_um2 = 0,
  direction_deg,
}: Gradient): OwnGradient {
  const q = quadratic_ppm_per_um2;
  const shape = typeof q === 'number' ? { xx: q, xy: 0, yy: q } : q;
  const along = direction_deg === undefined ? {} : { direction: unit(direction_deg) };
  return { linear: linear_ppm_per_um, xx: shape.xx, xy: shape.xy, yy: shape.yy, ...along };
}

/** (cos, sin), exact at quarter turns, so that what is 0 along an axis stays 0. */
function unit(degrees: number): [number, number] {
  const quarter = ((degrees % 360) + 360) % 360;
  if (quarter % 90 === 0) return ([[1, 0], [0, 1], [-1, 0], [0, -1]] as [number, number][])[quarter / 90]; // prettier-ignore
  const angle = (quarter * Math.PI) / 180;
  return [Math.cos(angle), Math.sin(angle)];
}

/** ppm of one residual: |g u.a + q:B|, or g |a| + |q:B| where the direction is the worst one. Lengths in um. */
export function ownError(gradient: OwnGradient, x: number, y: number, xx: number, xy: number, yy: number): number {
  const { linear, direction } = gradient;
  const bowl = gradient.xx * xx + 2 * gradient.xy * xy + gradient.yy * yy;
  if (direction) return Math.abs(linear * (direction[0] * x + direction[1] * y) + bowl);
  return Math.abs(linear) * Math.sqrt(x * x + y * y) + Math.abs(bowl);
}

/**
 * The largest INL under a gradient, LSB: `ownError` at its worst code. The residuals are those of the end-point fit, which
 * add up to 0; [hx, hy] is half a pitch in um.
 *
 * With a direction the error of a bit is a number: all positive ones. Without: with b_k = q:B_k, a sum reaches max over u of
 * sum d_k (g u.a_k + b_k), so at the worst u the bits that are on are those with g u.a_k + b_k > 0 (the other sign of the
 * bowl belongs to the complement, turned about). As u turns, a bit goes on and off at the two angles where cos(angle to a_k)
 * = -b_k / (g |a_k|); between such angles nothing changes, so one code per interval, 2 K + 1 of them, holds the maximum.
 */
export function worstOwnError(
  gradient: OwnGradient,
  residuals: Residuals,
  [hx, hy]: readonly [x: number, y: number],
): number {
  const lsb = PPM / Number(residuals.scale);
  const [x, y] = [residuals.x.map((v) => hx * Number(v)), residuals.y.map((v) => hy * Number(v))];
  const xx = residuals.xx.map((v) => hx * hx * Number(v));
  const xy = residuals.xy.map((v) => hx * hy * Number(v));
  const yy = residuals.yy.map((v) => hy * hy * Number(v));
  const bowl = xx.map((_, k) => gradient.xx * xx[k] + 2 * gradient.xy * xy[k] + gradient.yy * yy[k]);
  const g = Math.abs(gradient.linear);
  const errorOf = (isOn: (k: number) => boolean): number => {
    const sum = [0, 0, 0, 0, 0];
    for (let k = 0; k < x.length; k++) {
      if (isOn(k)) [x, y, xx, xy, yy].forEach((of, i) => (sum[i] += of[k]));
    }
    return lsb * ownError(gradient, sum[0], sum[1], sum[2], sum[3], sum[4]);
  };
  const { direction } = gradient;
  if (direction) {
    return errorOf((k) => gradient.linear * (direction[0] * x[k] + direction[1] * y[k]) + bowl[k] > 0);
  }
  const turns = [0];
  for (let k = 0; k < x.length; k++) {
    const reach = g * Math.sqrt(x[k] * x[k] + y[k] * y[k]);
    if (reach <= Math.abs(bowl[k])) continue;
    const half = Math.acos(-bowl[k] / reach);
    const towards = Math.atan2(y[k], x[k]);
    for (const angle of [towards - half, towards + half])
      turns.push(angle - 2 * Math.PI * Math.floor(angle / (2 * Math.PI)));
  }
  turns.sort((a, b) => a - b);
  let worst = 0;
  turns.forEach((from, i) => {
    const middle = (from + (turns[i + 1] ?? 2 * Math.PI)) / 2;
    const [cos, sin] = [Math.cos(middle), Math.sin(middle)];
    worst = Math.max(
      worst,
      errorOf((k) => g * (cos * x[k] + sin * y[k]) + bowl[k] > 0),
    );
  });
  return worst;
}
