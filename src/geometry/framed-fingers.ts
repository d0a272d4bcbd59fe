import type { Point } from '../core/layout.js';
import { rectangle } from '../core/rectangle.js';
import { nm } from '../core/units.js';
import type { ChannelRules } from '../hookup/channel-rules.js';
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
  rules: ChannelRules,
): void {
  const { roles } = technology;
  const sizes = fingerSizes(unit);
  const [px, py] = [sizes.frame[0] / 2, sizes.frame[1] / 2];
  const [wall, gap, bar] = [nm(unit.frameWidth_um), nm(unit.gap_um), nm(unit.barWidth_um)];
  const [width, length] = [nm(unit.fingerWidth_um), nm(unit.fingerLength_um)];
  const [tab, height] = rules.tab;
  const level = rules.tabLevel;
  const step = 2 * (width + gap);
  const combLeft = -sizes.comb[0] / 2;
  const barTop = sizes.barY + bar / 2;
  const bottom = { net: 'BOTTOM', part: 'plate' } as const;

  const hanging: Point[] = [];
  for (let finger = unit.fingers - 2; finger >= 0; finger--) {
    const x = combLeft + width + gap + finger * step;
    hanging.push([x + width, py - wall], [x + width, barTop + gap], [x, barTop + gap], [x, py - wall]);
  }
  sheet.outline(
    roles.bottomPlate,
    [
      [-px, -py],
      [-px + wall, -py],
      [-px + wall, py - wall],
      ...[...hanging].reverse(),
      [px, py - wall],
      [px, py],
      [-px, py],
      [-px, level + height / 2],
      [-px - tab, level + height / 2],
      [-px - tab, level - height / 2],
      [-px, level - height / 2],
    ],
    bottom,
  );
  sheet.outline(
    roles.bottomPlate,
    [
      [-px + wall, -py],
      [px, -py],
      [px, -level - height / 2],
      [px + tab, -level - height / 2],
      [px + tab, -level + height / 2],
      [px, -level + height / 2],
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
  if (roles.extractionExclusion !== undefined) sheet.add(roles.extractionExclusion, rectangle(-px, -py, px, py));
}
