import type { Point } from '../core/layout.js';
import { rectangle } from '../core/rectangle.js';
import { nm } from '../core/units.js';
import { viaBetween } from '../hookup/rules.js';
import type { StyledRules } from '../hookup/style.js';
import type { UnderPlateRules } from '../hookup/under-plate-rules.js';
import type { FramedFingersUnit, Technology } from '../spec/technology.js';
import { fingerSizes } from '../spec/unit-geometry.js';
import type { Sheet } from './sheet.js';

/**
 * Frame, comb and the region that an extractor leaves out.
 *
 *     +-----------------+
 *    =+ +-+  +-+  +-+   |      The frame is drawn as two pieces, since an outline has no hole: the upper side with the fingers and the
 *     | | |  | |  | |   |      left-hand wall, and the lower side with the right-hand wall.
 *     | | |  +-+  | |   +=
 *     | | +-------+ |   |
 *     | +-----------+   |
 *     +-----------------+
 */
export function drawFramedFingers(
  sheet: Sheet,
  technology: Technology,
  unit: FramedFingersUnit,
  rules: StyledRules,
): void {
  const { roles } = technology;
  const sizes = fingerSizes(unit);
  const [px, py] = [sizes.frame[0] / 2, sizes.frame[1] / 2];
  const low = rules.plateLow;
  const [wall, gap, bar] = [nm(unit.frameWidth_um), nm(unit.gap_um), nm(unit.barWidth_um)];
  const [width, length] = [nm(unit.fingerWidth_um), nm(unit.fingerLength_um)];
  const step = 2 * (width + gap);
  const combLeft = -sizes.comb[0] / 2;
  const barTop = sizes.barY + bar / 2;
  const bottom = { net: 'BOTTOM', part: 'plate' } as const;

  /** A tab on the right-hand side, from below; turned about the middle it is the left-hand one. */
  const tab = (turn: 1 | -1): Point[] => {
    if (rules.hookup !== 'channel') return [];
    const [out, height] = rules.tab;
    const level = -rules.tabLevel;
    const path: Point[] = [
      [px, level - height / 2],
      [px + out, level - height / 2],
      [px + out, level + height / 2],
      [px, level + height / 2],
    ];
    return path.map(([x, y]) => [turn * x, turn * y]);
  };
  const hanging: Point[] = [];
  for (let finger = unit.fingers - 2; finger >= 0; finger--) {
    const x = combLeft + width + gap + finger * step;
    hanging.push([x + width, py - wall], [x + width, barTop + gap], [x, barTop + gap], [x, py - wall]);
  }
  sheet.outline(
    roles.bottomPlate,
    [
      [-px, -low],
      [-px + wall, -low],
      [-px + wall, py - wall],
      ...[...hanging].reverse(),
      [px, py - wall],
      [px, py],
      [-px, py],
      ...tab(-1),
    ],
    bottom,
  );
  sheet.outline(
    roles.bottomPlate,
    [
      [-px + wall, -low],
      [px, -low],
      ...tab(1),
      [px, py - wall],
      [px - wall, py - wall],
      [px - wall, -py + wall],
      [-px + wall, -py + wall],
    ],
    bottom,
  );

  const standing: Point[] = [];
  for (let finger = unit.fingers - 1; finger >= 0; finger--) {
    const x = combLeft + finger * step;
    standing.push([x + width, barTop + length], [x, barTop + length]);
    if (finger > 0) standing.push([x, barTop], [x - 2 * gap - width, barTop]);
  }
  const barLow = sizes.barY - bar / 2;
  sheet.outline(roles.topPlate, [[combLeft, barLow], [-combLeft, barLow], ...standing], { net: 'TOP', part: 'plate' });
  // Between frame and comb the unit's capacitance says it all.
  if (roles.extractionExclusion !== undefined) sheet.add(roles.extractionExclusion, rectangle(-px, -low, px, py));
  if (rules.hookup === 'under-plate' && rules.floor) drawFloor(sheet, technology, rules);
}

/** A plate of the bottom terminal under frame and comb, which trunks pass below: joined to the frame at both ends of its lower side. */
function drawFloor(sheet: Sheet, technology: Technology, { plate, plateLow }: UnderPlateRules): void {
  const { roles } = technology;
  const via = viaBetween(technology, roles.stub, roles.bottomPlate);
  const [px, py] = [plate[0] / 2, plate[1] / 2];
  const landing = nm(via.size_um) / 2 + nm(via.enclosure_um);
  sheet.add(roles.stub, rectangle(-px, -plateLow, px, py), { net: 'BOTTOM', part: 'plate' });
  for (const x of [-px + landing, px - landing]) sheet.via(via.name, nm(via.size_um), x, -plateLow + landing, 'BOTTOM');
}
