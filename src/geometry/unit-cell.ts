import type { Structure } from '../core/layout.js';
import { rectangle } from '../core/rectangle.js';
import { nm } from '../core/units.js';
import type { ChannelRules } from '../hookup/channel-rules.js';
import type { Rules } from '../hookup/rules.js';
import type { StyledRules } from '../hookup/style.js';
import { viaBetween } from '../hookup/rules.js';
import type { ParallelPlateUnit, Technology } from '../spec/technology.js';
import { drawFramedFingers } from './framed-fingers.js';
import { drawLandings, placeholder } from './named-cell.js';
import { Sheet } from './sheet.js';

/**
 * The unit capacitor around 0,0, and the named cell that it refers to where there is one. Every unit is this one, dummies too, in one
 * orientation, so that all surroundings match.
 */
export function unitStructures(name: string, technology: Technology, rules: StyledRules): [Structure, ...Structure[]] {
  const { unit, roles } = technology;
  const sheet = new Sheet(technology);
  if (unit.kind === 'parallel-plate') drawPlates(sheet, technology, unit, rules);
  else if (unit.kind === 'framed-fingers') drawFramedFingers(sheet, technology, unit, rules);
  const references = unit.kind === 'named-cell' ? [drawLandings(sheet, technology, unit, rules)] : [];
  drawPad(sheet, technology, rules);
  const [px, py] = [rules.plate[0] / 2, rules.plate[1] / 2];
  const beside = rules.hookup === 'channel' ? rules.tab[0] : 0;
  sheet.add(roles.marker, rectangle(-px - beside, -rules.plateLow, px + beside, py));
  const own: Structure = { name, polygons: sheet.polygons, references, labels: [] };
  return unit.kind === 'named-cell' ? [own, placeholder(technology, unit)] : [own];
}

/** A bottom plate, a smaller top plate on it. */
function drawPlates(sheet: Sheet, technology: Technology, unit: ParallelPlateUnit, rules: StyledRules): void {
  const { roles } = technology;
  const [px, py] = [rules.plate[0] / 2, rules.plate[1] / 2];
  if (rules.hookup === 'channel') drawTabbedPlate(sheet, technology, rules);
  // The landing strip below the top plate is a part of the plate.
  else sheet.add(roles.bottomPlate, rectangle(-px, -rules.plateLow, px, py), { net: 'BOTTOM', part: 'plate' });
  const [tx, ty] = [nm(unit.topPlate_um[0]) / 2, nm(unit.topPlate_um[1]) / 2];
  sheet.add(roles.topPlate, rectangle(-tx, -ty, tx, ty), { net: 'TOP', part: 'plate' });
}

/**
 * A bottom plate with a tab on either side.
 *
 *        +-----------+
 *      +-+  +-----+  |        left tab: upper level
 *      +-+  | top |  |
 *        |  |   []|  +-+      right tab: lower level, the pad on it
 *        |  +-----+  +-+
 *        +-----------+
 */
function drawTabbedPlate(sheet: Sheet, { roles }: Technology, rules: ChannelRules): void {
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
}

/** The pad on the straps' metal, and the via down to the top terminal where that lies on another layer. */
function drawPad(sheet: Sheet, technology: Technology, { pad: [x, y], padSize }: Rules): void {
  const { roles } = technology;
  if (roles.topPlate !== roles.strap) {
    const via = viaBetween(technology, roles.topPlate, roles.strap);
    sheet.via(via.name, nm(via.size_um), x, y, 'TOP');
  }
  const half = padSize / 2;
  sheet.add(roles.strap, rectangle(x - half, y - half, x + half, y + half), { net: 'TOP', part: 'pad' });
}
