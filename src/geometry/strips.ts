import { rectangle } from '../core/rectangle.js';
import { viaBetween } from '../hookup/rules.js';
import type { ChannelHookup } from '../hookup/channel-wires.js';
import type { ChannelRules } from '../hookup/channel-rules.js';
import type { Technology } from '../spec/technology.js';
import type { Sheet } from './sheet.js';

/**
 * The shield below units that have none of their own: a `VSS` strip on the trunks' metal under each column, ring columns too, joined to the
 * frame at both ends by a neck no wider than a track, which metal beyond the frame may come near.
 *
 *     ==I==   frame, neck and via
 *     |   |
 *     |   |   strip
 *     |   |
 *     ==I==   frame; in a column with a line of the ring's own the strip ends above the line instead
 */
export function drawStrips(
  sheet: Sheet,
  technology: Technology,
  { frame, ringLines }: ChannelHookup,
  { half, spacing }: NonNullable<ChannelRules['strip']>,
): void {
  const { rules, rings, columns, rows, frameLow, height } = frame;
  const { roles } = technology;
  const via = viaBetween(technology, roles.trunk, roles.stub).name;
  const meaning = { net: 'VSS', part: 'shield' } as const;
  const track = rules.trackWidth / 2;
  // Drops end a track's spacing below the frame, and the strip may be wide metal.
  const lowest = Math.max(frameLow + rules.frameWidth, frameLow - rules.trackSpacing + spacing);
  const inner = [lowest, height - rules.frameWidth] as const;
  for (let column = -rings; column < columns + rings; column++) {
    const x = frame.columnX(column);
    const line = ringLines.some((one) => one.column === column);
    const low = line ? frame.rowY(rows) - rules.plate[1] / 2 + spacing : inner[0];
    sheet.add(roles.trunk, rectangle(x - half, low, x + half, inner[1]), meaning);
    const ends = [height - rules.frameWidth / 2, ...(line ? [] : [frameLow + rules.frameWidth / 2])];
    for (const y of ends) {
      const [from, to] = y > inner[1] ? [inner[1], y + track] : [y - track, inner[0]];
      sheet.add(roles.trunk, rectangle(x - track, from, x + track, to), meaning);
      sheet.via(via, rules.viaTrack.size, x, y, 'VSS');
    }
  }
}
