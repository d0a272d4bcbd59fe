/** One plate that is K units, K from 1 to 2, with the unit's ratio of perimeter to area. */
export interface NonUnitPlate {
  /** Units beside it. */
  readonly wholeUnits: number;
  readonly ratio: number;
  /** Longer side, shorter side. */
  readonly sides_um: readonly [number, number];
  /** The same on the grid. */
  readonly drawn_um: readonly [number, number];
  /** What the grid makes of the ratio. */
  readonly drawnRatio: number;
}

/**
 * A capacitor that is no whole number of units: whole units and one plate of K units, 1 <= K < 2. Perimeter over area is the unit's, so
 * that what etching takes off the edges takes the same share of both: with a unit w x h the sides add up to K (w + h) and their product
 * is K w h. For a square unit x1 that is y = x1 (K + sqrt(K^2 - K)), x = K x1^2 / y (Johns, Martin, Analog Integrated Circuit Design; from
 * memory).
 * @param unit_um sides of the unit's plate. @param units the capacitor in units, at least 1. @param grid_um what sides are rounded to.
 */
export function nonUnitPlate(
  unit_um: readonly [width: number, height: number],
  units: number,
  grid_um: number,
): NonUnitPlate {
  const [width, height] = unit_um;
  const wholeUnits = Math.floor(units) - 1;
  const ratio = units - wholeUnits;
  const half = (ratio * (width + height)) / 2;
  const area = ratio * width * height;
  const longer = half + Math.sqrt(half * half - area);
  const sides_um = [longer, area / longer] as const;
  const onGrid = (length_um: number): number => (Math.round(length_um / grid_um) * Math.round(1000 * grid_um)) / 1000;
  const drawn_um = [onGrid(sides_um[0]), onGrid(sides_um[1])] as const;
  return { wholeUnits, ratio, sides_um, drawn_um, drawnRatio: (drawn_um[0] * drawn_um[1]) / (width * height) };
}

/**
 * The relative error of the plate's ratio when every edge of every plate comes out moved inwards by `undercut_um`: what the equal ratio of
 * perimeter to area does not cancel, 4 e^2 (1 - K) / (K (w - 2e) (h - 2e)).
 */
export function etchResidue([width, height]: readonly [number, number], ratio: number, undercut_um: number): number {
  const left = (width - 2 * undercut_um) * (height - 2 * undercut_um);
  return (4 * undercut_um * undercut_um * (1 - ratio)) / (ratio * left);
}
