import { rectangle } from '../core/rectangle.js';
import type { Rectangle } from '../core/rectangle.js';
import { nm } from '../core/units.js';
import type { FramedFingersUnit, NamedCellUnit, Technology, Unit } from './technology.js';

/** The parts of a framed-fingers unit, in nanometres. */
export interface FingerSizes {
  /** The frame from outside to outside. */
  readonly frame: readonly [width: number, height: number];
  /** The comb from outside to outside. */
  readonly comb: readonly [width: number, height: number];
  /** The middle of the comb's bar above the unit's middle (negative: below). */
  readonly barY: number;
  /** The comb's edges that look straight at the frame across the gap. */
  readonly facing: number;
  readonly combArea: number;
}

type Fingers = Pick<
  FramedFingersUnit,
  'fingers' | 'fingerLength_um' | 'fingerWidth_um' | 'gap_um' | 'frameWidth_um' | 'barWidth_um'
>;

/**
 * Sizes of a framed-fingers unit.
 *
 *     +-----------------+   n fingers of the comb, n - 1 of the frame between them, a gap around the comb; the frame's
 *     | +-+  |  +-+  |  |   fingers end a gap above the bar, so n - 1 pairs of faces are a gap shorter than a finger.
 *     | | |  |  | |     |
 *     | | +-----+ |     |
 *     | +---------+     |
 *     +-----------------+
 */
export function fingerSizes(unit: Fingers): FingerSizes {
  const [n, length, width] = [unit.fingers, nm(unit.fingerLength_um), nm(unit.fingerWidth_um)];
  const [gap, wall, bar] = [nm(unit.gap_um), nm(unit.frameWidth_um), nm(unit.barWidth_um)];
  const comb = [(2 * n - 1) * width + 2 * (n - 1) * gap, bar + length] as const;
  const frame = [comb[0] + 2 * (gap + wall), comb[1] + 2 * (gap + wall)] as const;
  const sides = 2 * (n - 1) * (length - gap) + 2 * comb[1];
  const ends = (2 * n - 1) * width + comb[0];
  return {
    frame,
    comb,
    barY: -frame[1] / 2 + wall + gap + bar / 2,
    facing: sides + ends,
    combArea: comb[0] * bar + n * width * length,
  };
}

/** The outline of a named cell in its own coordinates. */
export const cellOutline = ({ outline_um: [low, high] }: NamedCellUnit): Rectangle =>
  rectangle(nm(low[0]), nm(low[1]), nm(high[0]), nm(high[1]));

/** Width and height of what a unit occupies, in micrometres: its bottom plate, its frame, or the named cell's outline. */
export function unitSize_um(unit: Unit): readonly [width: number, height: number] {
  switch (unit.kind) {
    case 'parallel-plate':
      return [unit.topPlate_um[0] + 2 * unit.plateEnclosure_um, unit.topPlate_um[1] + 2 * unit.plateEnclosure_um];
    case 'framed-fingers': {
      const { frame } = fingerSizes(unit);
      return [frame[0] / 1000, frame[1] / 1000];
    }
    case 'named-cell':
      return [unit.outline_um[1][0] - unit.outline_um[0][0], unit.outline_um[1][1] - unit.outline_um[0][1]];
  }
}

/** The area (um2) that the area law of mismatch counts: the top plate, the frame with all in it, or the named cell's outline. */
export function matchedArea_um2(unit: Unit): number {
  const [width, height] = unit.kind === 'parallel-plate' ? unit.topPlate_um : unitSize_um(unit);
  return width * height;
}

/** Whether a square of the bottom plate metal's `wideFrom_um` fits into what a unit has of it; a named cell's hookup is narrow. */
export function isWideUnit({ unit, layers, roles }: Technology): boolean {
  const from = layers.find((layer) => layer.name === roles.bottomPlate)?.wideFrom_um;
  if (from === undefined || unit.kind === 'named-cell') return false;
  const [width, height] = unitSize_um(unit);
  const { strip_um = 0 } = unit;
  const widest =
    unit.kind === 'parallel-plate'
      ? Math.min(width, height + strip_um)
      : Math.max(unit.frameWidth_um + strip_um, unit.fingerWidth_um);
  return nm(Math.round(widest * 1000) / 1000) >= nm(from);
}

/**
 * Capacitance (fF) of a drawn unit from the technology's densities: plates by area and perimeter, fingers by the length over which they
 * face the frame; undefined for a named cell and where the technology states no density.
 */
export function drawnCapacitance_fF({ unit, dielectric }: Pick<Technology, 'unit' | 'dielectric'>): number | undefined {
  if (unit.kind === 'parallel-plate') {
    const { plateCapacitance_fF_per_um2: density, plateFringe_fF_per_um: fringe = 0 } = dielectric;
    const [width, height] = unit.topPlate_um;
    return density === undefined ? undefined : width * height * density + 2 * (width + height) * fringe;
  }
  if (unit.kind === 'named-cell' || dielectric.facingCapacitance_fF_per_um === undefined) return undefined;
  return (fingerSizes(unit).facing / 1000) * dielectric.facingCapacitance_fF_per_um;
}
