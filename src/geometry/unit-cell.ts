import type { Structure } from '../core/layout.js';
import { rectangle } from '../core/rectangle.js';
import type { Rules } from '../hookup/rules.js';
import { viaBetween } from '../hookup/rules.js';
import type { Technology } from '../spec/technology.js';
import { nm } from '../core/units.js';
import { Sheet } from './sheet.js';

/**
 * The unit capacitor around 0,0: a bottom plate with a tab on either side, a smaller top plate on it, a pad up to the straps' metal. Every
 * unit is this one, dummies too, in one orientation, so that all surroundings match.
 *
 *        +-----------+
 *      +-+  +-----+  |        left tab: upper level
 *      +-+  | top |  |
 *        |  |   []|  +-+      right tab: lower level, the pad on it
 *        |  +-----+  +-+
 *        +-----------+
 */
export function unitCell(name: string, technology: Technology, rules: Rules): Structure {
  const { roles } = technology;
  const sheet = new Sheet(technology);
  const [px, py] = [rules.plate[0] / 2, rules.plate[1] / 2];
  const [length, height] = rules.tab;
  const level = rules.tabLevel;
  const half = height / 2;
  sheet.outline(
    roles.bottomPlate,
    [
      [-px, -py],
      [px, -py],
      [px, -level - half],
      [px + length, -level - half],
      [px + length, -level + half],
      [px, -level + half],
      [px, py],
      [-px, py],
      [-px, level + half],
      [-px - length, level + half],
      [-px - length, level - half],
      [-px, level - half],
    ],
    { net: 'BOTTOM', part: 'plate' },
  );
  const [tx, ty] = [rules.topPlate[0] / 2, rules.topPlate[1] / 2];
  sheet.add(roles.topPlate, rectangle(-tx, -ty, tx, ty), { net: 'TOP', part: 'plate' });
  const toStraps = viaBetween(technology, roles.topPlate, roles.strap);
  sheet.via(toStraps.name, nm(toStraps.size_um), rules.pad[0], rules.pad[1], 'TOP');
  const pad = rules.padSize / 2;
  sheet.add(roles.strap, rectangle(rules.pad[0] - pad, rules.pad[1] - pad, rules.pad[0] + pad, rules.pad[1] + pad), {
    net: 'TOP',
    part: 'pad',
  });
  sheet.add(roles.marker, rectangle(-px - length, -py, px + length, py));
  return { name, polygons: sheet.polygons, references: [], labels: [] };
}
