/** A drawing as plain data, in whole database units (nanometres). Coordinates stay within +-2^25 so that cross products are exact. */

export type Point = readonly [x: number, y: number];

/** What a shape is there for. Absent on markers and outlines. */
export type Part =
  'plate' | 'tab' | 'pad' | 'trunk' | 'stub' | 'bus' | 'drop' | 'strap' | 'spine' | 'ring' | 'shield' | 'pin' | 'via';

/** Counter-clockwise outline, first point not repeated. `net` is what the shape is meant to carry (inside a unit: TOP or BOTTOM). */
export interface Polygon {
  readonly layer: number;
  readonly datatype: number;
  readonly net?: string;
  readonly part?: Part;
  readonly xy: readonly Point[];
}

/** An array of instances: mirrored about the x axis first, then turned counter-clockwise; steps are vectors of the parent. */
export interface Reference {
  readonly structure: string;
  readonly origin: Point;
  readonly columns: number;
  readonly rows: number;
  readonly columnStep: Point;
  readonly rowStep: Point;
  readonly mirrored: boolean;
  readonly angle_deg: number;
  /** Which capacitor each instance is meant to be, row by row from the origin; "-" and "=" are dummies. */
  readonly cells?: readonly string[];
}

export interface Label {
  readonly text: string;
  readonly layer: number;
  readonly texttype: number;
  readonly xy: Point;
}

export interface Structure {
  readonly name: string;
  readonly polygons: readonly Polygon[];
  readonly references: readonly Reference[];
  readonly labels: readonly Label[];
}
