/** Path data in whole numbers: absolute where a subpath starts, relative after, so nothing adds up but whole numbers. */

export const box = (x: number, y: number, width: number, height: number): string =>
  `M${x} ${y}h${width}v${height}h${-width}z`;

export const line = (x0: number, y0: number, x1: number, y1: number): string => `M${x0} ${y0}l${x1 - x0} ${y1 - y0}`;

/** A circle as four Bezier arcs, control points rounded to whole numbers. */
export function circle(x: number, y: number, radius: number): string {
  const k = Math.round(radius * 0.5523);
  const r = radius;
  const m = r - k;
  return `M${x + r} ${y}c0 ${k} ${-m} ${r} ${-r} ${r}c${-k} 0 ${-r} ${-m} ${-r} ${-r}c0 ${-k} ${m} ${-r} ${r} ${-r}c${k} 0 ${r} ${m} ${r} ${r}z`;
}

export function greatestCommonDivisor(a: number, b: number): number {
  while (b !== 0) [a, b] = [b, a % b];
  return Math.abs(a);
}
