import { rectangle } from '../core/rectangle.js';
import { nm } from '../core/units.js';
import { layerOf, lengthOf, type Rules, viaBetween } from '../hookup/rules.js';
import type { Technology } from '../spec/technology.js';
import type { Sheet } from './sheet.js';

/**
 * Joins a wire on the trunks' metal to the frame above it, around a point on both. Where trunks are met on another metal than the frame's
 * there is a pad between the two, and a via to either.
 */
export function joinToFrame(
  sheet: Sheet,
  technology: Technology,
  rules: Rules,
  x: number,
  y: number,
  net: string,
): void {
  const { roles, grid_nm: grid } = technology;
  sheet.via(viaBetween(technology, roles.trunk, roles.stub).name, rules.viaTrack.size, x, y, net);
  if (roles.stub === roles.bottomPlate) return;
  const via = viaBetween(technology, roles.stub, roles.bottomPlate);
  const { minWidth_um, minArea_um2 = 0 } = layerOf(technology, roles.stub);
  const least = Math.max(
    rules.viaTrack.landing,
    nm(via.size_um) + 2 * nm(via.enclosure_um),
    lengthOf(minWidth_um),
    1000 * Math.sqrt(minArea_um2),
  );
  const half = grid * Math.ceil(least / 2 / grid);
  sheet.add(roles.stub, rectangle(x - half, y - half, x + half, y + half), { net, part: 'pad' });
  sheet.via(via.name, nm(via.size_um), x, y, net);
}
