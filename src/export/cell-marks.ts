import type { Paint } from './palette.js';

/** The strokes of a mark around each of the given middles, `side` wide, as one path in whole numbers. */
export function cellMarks(
  mark: Paint['mark'],
  middles: readonly (readonly [x: number, y: number])[],
  side: number,
): string {
  const scaled = mark.map(([[x0, y0], [x1, y1]]) =>
    [x0, y0, x1 - x0, y1 - y0].map((value) => Math.round((value * side) / 8)),
  );
  let path = '';
  for (const [x, y] of middles)
    for (const [x0, y0, dx, dy] of scaled as [number, number, number, number][])
      path += `M${Math.round(x) + x0} ${Math.round(y) + y0}l${dx} ${dy}`;
  return path;
}
