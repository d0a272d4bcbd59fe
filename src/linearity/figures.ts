import { nm } from '../core/units.js';
import type { Core } from '../spec/floorplan.js';

/** Whole nanometres. */
export type PitchNm = readonly [x: number, y: number];

/** @throws RangeError if a pitch is no whole number of nanometres. */
export const pitchNm = (pitch_um: readonly [x: number, y: number]): PitchNm => [nm(pitch_um[0]), nm(pitch_um[1])];

export const PPM = 1e-6;
/** Micrometres in half a nanometre: half-pitches times a pitch in nanometres count these. */
export const HALF_NM = 0.0005;
const ONE_PERCENT = 0.01;

/** A residual from the whole number (2 scale residual)^2. */
const root = (squared: bigint, scale: bigint): number => Math.sqrt(Number(squared)) / (2 * Number(scale));

/** LSB under 1 ppm/um, from (2 scale residual)^2 in half-nanometres. */
export const perPpmPerUm = (squared: bigint, scale: bigint): number =>
  squared === 0n ? 0 : PPM * HALF_NM * root(squared, scale);

/** LSB under 1 ppm/um^2, from (2 scale residual)^2 in half-nanometres squared. */
export const perPpmPerUm2 = (squared: bigint, scale: bigint): number =>
  squared === 0n ? 0 : PPM * HALF_NM * HALF_NM * root(squared, scale);

/**
 * What to multiply a figure per ppm/um (`order` 1) or per ppm/um^2 (2) by, for one per cent from the centre to the farthest
 * cell.
 */
export function onePercent({ rows, columns, pitch_um }: Core, order: 1 | 2): number {
  const [px, py] = pitchNm(pitch_um);
  const [x, y] = [(columns - 1) * px, (rows - 1) * py];
  // A core of one cell has no farthest one, and every figure is 0.
  if (x === 0 && y === 0) return 0;
  const far_um = HALF_NM * Math.sqrt(x * x + y * y);
  return ONE_PERCENT / PPM / (order === 1 ? far_um : far_um * far_um);
}
