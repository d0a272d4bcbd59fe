import { nm } from '../core/units.js';
import type { Technology, Unit } from '../spec/technology.js';
import { cellOutline, fingerSizes } from '../spec/unit-geometry.js';

/** What of a unit the hookup goes by, in nanometres about the unit's middle. */
export interface UnitBody {
  readonly plate: readonly [width: number, height: number];
  /** The least that is solid at the plate's edge. */
  readonly rim: number;
  /** Where the top terminal is met from above. */
  readonly pad: readonly [x: number, y: number];
  /** By how much the top plate's edge lies within the plate's. */
  readonly topInset: number;
}

/**
 * @param room `frameWidth`: of a wire that a via to the straps' metal fits on; `clearance`: what metal of unknown width must keep. Both are
 * for the landing around a named cell.
 */
export function unitBody(
  { unit }: Technology,
  room: { readonly frameWidth: number; readonly clearance: number },
): UnitBody {
  const at = unit.terminals.top.at_um;
  const pad = [nm(at[0]), nm(at[1])] as const;
  switch (unit.kind) {
    case 'parallel-plate': {
      const inset = nm(unit.plateEnclosure_um);
      const plate = [nm(unit.topPlate_um[0]) + 2 * inset, nm(unit.topPlate_um[1]) + 2 * inset] as const;
      return { plate, rim: Math.min(...plate), pad, topInset: inset };
    }
    case 'framed-fingers': {
      const wall = nm(unit.frameWidth_um);
      return { plate: fingerSizes(unit).frame, rim: wall, pad, topInset: wall + nm(unit.gap_um) };
    }
    case 'named-cell': {
      const { x0, y0, x1, y1 } = cellOutline(unit);
      const around = 2 * (room.clearance + room.frameWidth);
      return {
        plate: [x1 - x0 + around, y1 - y0 + around],
        rim: room.frameWidth,
        pad: [pad[0] - (x0 + x1) / 2, pad[1] - (y0 + y1) / 2],
        topInset: room.clearance + room.frameWidth,
      };
    }
  }
}

/** How far a unit's tabs stand out, and at which level; without one where the hookup may choose it. */
export function unitTabs(unit: Unit): { readonly length: number; readonly level?: number } {
  if (unit.kind === 'named-cell') return { length: 0 };
  const { tab_um = [0, 0], tabLevel_um = 0 } = unit;
  return { length: nm(tab_um[0]), level: nm(tabLevel_um) };
}

/** Height of a unit's landing strip below its plate; a named cell has its landing within. */
export const unitStrip = (unit: Unit): number => (unit.kind === 'named-cell' ? 0 : nm(unit.strip_um ?? 0));
