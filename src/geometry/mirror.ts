import type { Point, Reference, Structure } from '../core/layout.js';

/** Which coordinate a mirroring turns round. */
export type Axis = 'x' | 'y';

/**
 * The mirror image of a structure: a point at c on the axis comes to lie at `extent` - c.
 * @param structure its references are arrays with columns to the right and rows upwards, and so are those of the image; their instances are
 * mirrored with it.
 */
export function mirrorImage(structure: Structure, axis: Axis, extent: number): Structure {
  const move = ([x, y]: Point): Point => (axis === 'x' ? [extent - x, y] : [x, extent - y]);
  return {
    ...structure,
    polygons: structure.polygons.map((polygon) => ({ ...polygon, xy: fromLowest(polygon.xy.map(move).reverse()) })),
    labels: structure.labels.map((label) => ({ ...label, xy: move(label.xy) })),
    references: structure.references.map((reference) => imageOf(reference, axis, move)),
  };
}

/** An outline begins at its lowest, then leftmost point. */
function fromLowest(xy: readonly Point[]): Point[] {
  let first = 0;
  xy.forEach(([x, y], i) => {
    const [fx, fy] = xy[first];
    if (y < fy || (y === fy && x < fx)) first = i;
  });
  return [...xy.slice(first), ...xy.slice(0, first)];
}

/**
 * With M a mirroring about the x axis and R(a) a turn, M R(a) = R(-a) M, and a mirroring about the y axis is R(180) M. So the image of R(a)
 * or R(a) M has the other kind of M, and is turned by -a, or by 180 - a. The far end of the array becomes its origin.
 */
function imageOf(reference: Reference, axis: Axis, move: (point: Point) => Point): Reference {
  const { origin, rows, columns, columnStep, rowStep, mirrored, angle_deg, cells } = reference;
  const [count, [dx, dy]] = axis === 'x' ? [columns, columnStep] : [rows, rowStep];
  return {
    ...reference,
    origin: move([origin[0] + (count - 1) * dx, origin[1] + (count - 1) * dy]),
    mirrored: !mirrored,
    angle_deg: (360 + (axis === 'x' ? 180 : 0) - angle_deg) % 360,
    ...(cells && { cells: reordered(cells, columns, axis) }),
  };
}

/** Instances row by row, with their columns or their rows in the opposite order. */
function reordered(cells: readonly string[], columns: number, axis: Axis): string[] {
  const starts = Array.from({ length: cells.length / columns }, (_, row) => row * columns);
  const lines = starts.map((start) => cells.slice(start, start + columns));
  return axis === 'x' ? lines.flatMap((line) => line.reverse()) : lines.reverse().flat();
}
