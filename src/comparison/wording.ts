/** Four significant digits: enough to compare, short enough to read. */
export const brief = (value: number): string => String(Number(value.toPrecision(4)));

/** The same, small figures with an exponent: for columns of figures of many sizes. */
export const compact = (value: number): string =>
  value !== 0 && Math.abs(value) < 0.001 ? value.toExponential(3).replace(/\.?0*e/, 'e') : brief(value);

/** Worst shapes have spectral norm 1: a bowl, which is the identity, or a saddle, whose trace is 0. */
interface Shape {
  readonly xx: number;
  readonly xy: number;
  readonly yy: number;
}

/** The direction in which a saddle rises, in degrees from the x axis, 0 to 180; undefined for a bowl. */
export function saddleDirection({ xx, xy, yy }: Shape): number | undefined {
  if (xx + yy > 1) return undefined;
  const direction = (Math.atan2(2 * xy, xx - yy) * 90) / Math.PI;
  return direction < 0 ? direction + 180 : direction;
}

/** A worst shape in the words of the trade. */
export function shapeInWords(shape: Shape): string {
  const direction = saddleDirection(shape);
  return direction === undefined ? 'a bowl' : `a saddle along ${brief(direction)} degrees`;
}
