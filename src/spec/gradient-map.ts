/** A point of a measured map: relative deviation of a unit there, x to the right and y upwards from the core's centre. */
export interface MapPoint {
  readonly x_um: number;
  readonly y_um: number;
  readonly ppm: number;
}

/** No two points at one place. */
export type GradientMap = readonly MapPoint[];

/** Names a place to a picometre, far below what a map or a grid resolves: cell centres are whole half-nanometres. */
export const placeKey = (x_um: number, y_um: number): string => `${Math.round(x_um * 1e6)} ${Math.round(y_um * 1e6)}`;
