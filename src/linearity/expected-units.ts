import type { Capacitor, Core } from '../spec/floorplan.js';
import { HALF_NM, PPM, pitchNm } from './figures.js';
import { momentsOfCells } from './moments.js';
import type { OwnGradient } from './own-gradient.js';

/** The bits of an array by ascending weight; equal ones stay in the given order. */
export const bitsOf = (capacitors: readonly Capacitor[]): readonly Capacitor[] =>
  capacitors.filter(({ role }) => role === 'bit').sort((a, b) => a.weight - b.weight);

/** What each bit is under a gradient, in units: `flat` and, for a slope along the unit vector u, u_x x + u_y y on top. */
export interface UnitsUnderGradient {
  readonly flat: readonly number[];
  readonly x: readonly number[];
  readonly y: readonly number[];
}

/**
 * The bits' capacitances under a gradient, in the linear model: their units with the bowl or saddle, and what the slope adds by direction.
 * @param bits by ascending weight
 */
export function unitsUnder(
  gradient: OwnGradient,
  { core, cells }: { readonly core: Core; readonly cells: readonly (readonly string[])[] },
  bits: readonly Capacitor[],
): UnitsUnderGradient {
  const names = bits.map(({ name }) => name);
  const weight = bits.map((bit) => bit.weight);
  const { x, y, xx, xy, yy } = momentsOfCells(names, weight, cells);
  const [px, py] = pitchNm(core.pitch_um);
  const [hx, hy] = [HALF_NM * px, HALF_NM * py];
  const flat = bits.map(({ units }, k) => {
    const bowl = gradient.xx * hx * hx * xx[k] + 2 * gradient.xy * hx * hy * xy[k] + gradient.yy * hy * hy * yy[k];
    return units + PPM * bowl;
  });
  const slope = (moments: Float64Array, half: number) =>
    Array.from(moments, (sum) => PPM * gradient.linear * half * sum);
  return { flat, x: slope(x, hx), y: slope(y, hy) };
}

/**
 * The bits' capacitances in one direction of the slope: the gradient's own, else the one in which |INL| becomes largest.
 *
 * With e_k = a_k + u.b_k the errors besides gain, to first order, the largest |INL| is max over signs 1/2 sum s_k e_k. For given signs it
 * is largest along sum s_k b_k; and the signs of all e_k change at 2 K directions only, where cos(angle to b_k) = -a_k / |b_k|. So one
 * direction for each interval between them, the best one for its signs, holds the worst of all.
 */
export function alongSlope(
  { flat, x, y }: UnitsUnderGradient,
  weight: readonly number[],
  direction: readonly [x: number, y: number] | undefined,
): readonly number[] {
  const along = ([ux, uy]: readonly [number, number]) => flat.map((units, k) => units + ux * x[k] + uy * y[k]);
  if (direction) return along(direction);
  const total = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0);
  const W = total(weight);
  const withoutGain = (values: readonly number[]) => {
    const all = total(values);
    return values.map((value, k) => value - (weight[k] * all) / W);
  };
  const [a, bx, by] = [flat, x, y].map(withoutGain);
  const turns = [0];
  a.forEach((part, k) => {
    const reach = Math.sqrt(bx[k] * bx[k] + by[k] * by[k]);
    if (reach <= Math.abs(part)) return;
    const half = Math.acos(-part / reach);
    const towards = Math.atan2(by[k], bx[k]);
    for (const angle of [towards - half, towards + half])
      turns.push(angle - 2 * Math.PI * Math.floor(angle / (2 * Math.PI)));
  });
  turns.sort((one, other) => one - other);
  let worst = along([1, 0]);
  let most = -1;
  turns.forEach((from, i) => {
    const middle = (from + (turns[i + 1] ?? 2 * Math.PI)) / 2;
    const [cos, sin] = [Math.cos(middle), Math.sin(middle)];
    const signs = a.map((part, k) => (part + cos * bx[k] + sin * by[k] > 0 ? 1 : -1));
    const [sx, sy] = [bx, by].map((values) => values.reduce((sum, value, k) => sum + signs[k] * value, 0));
    const length = Math.sqrt(sx * sx + sy * sy);
    if (length === 0) return;
    const u = [sx / length, sy / length] as const;
    const inl = a.reduce((sum, part, k) => sum + Math.abs(part + u[0] * bx[k] + u[1] * by[k]), 0);
    if (inl <= most) return;
    most = inl;
    worst = along(u);
  });
  return worst;
}
