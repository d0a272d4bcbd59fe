/** An axis-parallel rectangle in whole nanometres, x0 < x1 and y0 < y1. */
export interface Rectangle {
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
}

export const rectangle = (x0: number, y0: number, x1: number, y1: number): Rectangle => ({ x0, y0, x1, y1 });

/** The rectangle grown by `by` on all sides. */
export const grown = (r: Rectangle, by: number): Rectangle => rectangle(r.x0 - by, r.y0 - by, r.x1 + by, r.y1 + by);

/** The outline, counter-clockwise from the lower left corner. */
export const outline = (r: Rectangle): [number, number][] => [
  [r.x0, r.y0],
  [r.x1, r.y0],
  [r.x1, r.y1],
  [r.x0, r.y1],
];
