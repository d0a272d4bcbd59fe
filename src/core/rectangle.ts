/** An axis-parallel rectangle in whole nanometres, x0 < x1 and y0 < y1. */
export interface Rectangle {
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
}

export const rectangle = (x0: number, y0: number, x1: number, y1: number): Rectangle => ({ x0, y0, x1, y1 });

/** The outline, counter-clockwise from the lower left corner. */
export const outline = (r: Rectangle): [number, number][] => [
  [r.x0, r.y0],
  [r.x1, r.y0],
  [r.x1, r.y1],
  [r.x0, r.y1],
];
