import { Infeasible } from '../core/problem.js';
import { nm } from '../core/units.js';
import type { Technology } from '../spec/technology.js';
import { commonRules, inMicrometres, layerOf, lengthOf, type Rules } from './rules.js';
import { unitStrip } from './unit-body.js';

/** What the under-plate style needs of a technology besides: places for trunks below a column, and where they meet its units. */
export interface UnderPlateRules extends Rules {
  readonly hookup: 'under-plate';
  /** Left edges of the places, from the middle of a column, from left to right. */
  readonly places: readonly number[];
  /** From a unit's middle down to the middle of the via that joins it to its trunk. */
  readonly landingLow: number;
  /** Whether a plate of the bottom terminal on the stubs' metal lies under the whole unit. */
  readonly floor: boolean;
}

/** How far inside the plate's edges (nm) trunks stay: flush with an edge they couple more than twice as much to the top plate as within. */
const inset = 500;

/**
 * Derives the dimensions of an under-plate drawing from a technology's rules.
 * @throws Infeasible where the rules leave no room: which rule, and what would make it possible.
 */
export function underPlateRules(technology: Technology): UnderPlateRules {
  const { unit, roles } = technology;
  const common = commonRules(technology, 'narrow straps');
  const { grid, plate, spacing, trackWidth, lineSpacing, viaTrack, frameWidth, strapX, strapWidth } = common;

  const floor = roles.stub !== roles.bottomPlate;
  const plateLow = plate[1] / 2 + unitStrip(unit);
  const { wideFrom_um, wideSpacing_um, minSpacing_um } = layerOf(technology, roles.stub);
  const isWide = wideFrom_um !== undefined && Math.min(plate[0], plate[1] / 2 + plateLow) >= nm(wideFrom_um);
  const floorSpacing = floor ? lengthOf(isWide ? wideSpacing_um : minSpacing_um) : 0;
  const floorGap = 2 * grid * Math.ceil(floorSpacing / (2 * grid));

  // The landing around a named cell is open beside one of its corners.
  const clear = unit.kind === 'named-cell' ? Math.max(inset, frameWidth + spacing) : inset;
  const reach = plate[0] / 2 - clear;
  // The gaps between the rows would show a trunk the strap above it.
  const rooms = [
    [-reach, strapX - strapWidth / 2],
    [strapX + strapWidth / 2, reach],
  ];
  const step = trackWidth + lineSpacing;
  const places = rooms.flatMap(([from, to]) => {
    const count = Math.max(0, Math.floor((to - from + lineSpacing) / step));
    const first = from + grid * Math.floor((to - from - (count * step - lineSpacing)) / 2 / grid);
    return Array.from({ length: count }, (_, i) => first + i * step);
  });
  if (places.length === 0)
    throw new Infeasible(
      `No trunk ${inMicrometres(trackWidth)} wide fits below a unit ${inMicrometres(plate[0])} wide, ${inMicrometres(clear)} inside its edges and clear of a strap ${inMicrometres(strapWidth)} wide.`,
      'Take a larger unit, or a technology with the hookup "channel".',
    );
  return {
    ...common,
    hookup: 'under-plate',
    wideSpacing: Math.max(common.wideSpacing, floorSpacing),
    rowGap: Math.max(common.rowGap, floorGap),
    bottomGap: Math.max(common.bottomGap, floorGap),
    plateLow,
    places,
    landingLow: plateLow - viaTrack.landing / 2,
    floor,
  };
}
