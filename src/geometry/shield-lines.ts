import { Infeasible } from '../core/problem.js';
import { rectangle } from '../core/rectangle.js';
import { um } from '../core/units.js';
import type { ChannelHookup } from '../hookup/channel-wires.js';
import { viaBetween } from '../hookup/rules.js';
import type { Technology } from '../spec/technology.js';
import type { Sheet } from './sheet.js';

/**
 * A `VSS` line on the straps' metal over the middle of each channel, from the frame's bottom side up to the spine: what the shield lets
 * through where stubs cut it ends there instead of on a strap.
 *
 *     ============   spine
 *      |   .   |
 *      |   |   |     strap, line, strap
 *      |   |   |
 *     -----x------   frame
 *
 * @throws Infeasible where the channels are too narrow for it.
 */
export function drawShieldLines(
  sheet: Sheet,
  technology: Technology,
  { frame }: ChannelHookup,
  groundedFills: boolean,
): void {
  const { rules, columns, frameLow } = frame;
  const { roles } = technology;
  const half = rules.padSize / 2;
  const reach = Math.max(rules.plate[0] / 2 + (groundedFills ? rules.tab[0] : 0), rules.pad[0] + half);
  const middle = Math.floor(frame.pitch[0] / 2 / rules.grid) * rules.grid;
  const free = middle - half - reach;
  if (free < rules.upperSpacing)
    throw new Infeasible(
      `A shield line over a channel stands ${um(free)} um from what belongs to its columns; ${um(rules.upperSpacing)} um are needed on its metal.`,
      'Allow more tracks per channel, or leave shieldLines out.',
    );
  const via = viaBetween(technology, roles.bottomPlate, roles.strap).name;
  const top = frame.rowY(0) + rules.plate[1] / 2 - rules.upperSpacing;
  for (let channel = 0; channel <= columns; channel++) {
    // Rounded down, it stands nearer to the left-hand column: the distance above is the smaller one.
    const x = frame.columnX(channel - 1) + middle;
    sheet.add(roles.strap, rectangle(x - half, frameLow, x + half, top), { net: 'VSS', part: 'shield' });
    sheet.via(via, rules.viaFrame.size, x, frameLow + rules.frameWidth / 2, 'VSS');
  }
}
