import { type Frame, frameOf, type FrameSize } from './frame.js';
import type { UnderPlateRules } from './under-plate-rules.js';

/** The frame with the places for trunks below its columns. */
export interface UnderPlateFrame extends Frame {
  readonly rules: UnderPlateRules;
  /** Left edge of a place below a column. */
  placeX(column: number, place: number): number;
  /** Middle of the vias on a row's landing strips. */
  landingY(row: number): number;
}

/** Column and row pitch in nanometres: the gap beside a plate is the wide spacing, whatever runs below. */
export const underPlatePitch = (rules: UnderPlateRules): [x: number, y: number] => [
  rules.plate[0] + rules.wideSpacing,
  rules.plate[1] / 2 + rules.plateLow + rules.rowGap,
];

export function underPlateFrame(rules: UnderPlateRules, size: FrameSize): UnderPlateFrame {
  const frame = frameOf(rules, size, underPlatePitch(rules), rules.wideSpacing);
  return {
    ...frame,
    placeX: (column, place) => frame.columnX(column) + rules.places[place],
    landingY: (row) => frame.rowY(row) - rules.landingLow,
  };
}
