import { rectangle } from '../core/rectangle.js';
import type { Frame } from '../hookup/frame.js';
import { viaBetween } from '../hookup/rules.js';
import type { Technology } from '../spec/technology.js';
import type { Sheet } from './sheet.js';

/**
 * Leads `TOP` to the side where the bits leave without crossing a wire of theirs: the spine goes on to the right, in the row gap above the
 * ring units, over the frame and down outside of it. A `VSS` line beyond, from the frame's top side on, keeps neighbours of the block away.
 *
 *     ==========I    frame's top side, longer by the width of this; its via
 *     -----+    #    spine
 *       |  | T  #    ring, frame, TOP, VSS
 *       |  | T  #
 */
export function drawTopAside(
  sheet: Sheet,
  technology: Technology,
  { rules, width, height, blockWidth }: Frame,
  aside: NonNullable<Frame['aside']>,
  spine: { readonly x: number; readonly y0: number; readonly y1: number },
): void {
  const { roles } = technology;
  const top = { net: 'TOP', part: 'spine' } as const;
  const end = aside.top + rules.strapWidth;
  sheet.add(roles.spine, rectangle(spine.x, spine.y0, end, spine.y1), top);
  sheet.add(roles.spine, rectangle(aside.top, 0, end, spine.y1), top);
  sheet.pin(roles.spine, rectangle(aside.top, 0, end, rules.strapWidth), 'TOP');

  const w = rules.frameWidth;
  sheet.add(roles.bottomPlate, rectangle(width - w, height - w, blockWidth, height), { net: 'VSS', part: 'ring' });
  sheet.add(roles.spine, rectangle(aside.guard, 0, blockWidth, height), { net: 'VSS', part: 'shield' });
  const via = viaBetween(technology, roles.bottomPlate, roles.spine);
  sheet.via(via.name, rules.viaFrame.size, aside.guard + rules.guardWidth / 2, height - w / 2, 'VSS');
}
