import { componentsOf } from '../core/components.js';
import { nm } from '../core/units.js';
import type { Via } from '../spec/technology.js';
import type { Drawing, Region } from './drawing.js';
import { coveredArea, liesBelow } from './drawing.js';
import type { Finding } from './finding.js';
import { placeUm } from './finding.js';
import { checkViaSpacing } from './shape-rules.js';

function size(drawing: Drawing, via: Via): Finding[] {
  const { slabs } = drawing.viaSheet(via.name);
  const shapes = componentsOf(slabs);
  const side = nm(via.size_um);
  const pieces = new Int32Array(shapes.count);
  for (let i = 0; i < slabs.x0.length; i++) pieces[shapes.of[i]]++;
  const findings: Finding[] = [];
  const wrong = new Set<number>();
  for (let i = 0; i < slabs.x0.length; i++) {
    const [width, height] = [slabs.x1[i] - slabs.x0[i], slabs.y1[i] - slabs.y0[i]];
    const single = pieces[shapes.of[i]] === 1;
    if ((single && width === side && height === side) || wrong.has(shapes.of[i])) continue;
    wrong.add(shapes.of[i]);
    findings.push({
      rule: 'via-size',
      layer: via.name,
      at_um: placeUm((slabs.x0[i] + slabs.x1[i]) / 2, (slabs.y0[i] + slabs.y1[i]) / 2),
      limit_um: via.size_um,
      text: single
        ? `${width / 1000} x ${height / 1000} um, exactly ${via.size_um} um square wanted`
        : `no square of ${via.size_um} um`,
      ...(single ? { found_um: (width === side ? height : width) / 1000 } : {}),
    });
  }
  return findings;
}

/** Of several vias drawn on one stream layer, the one whose layers are both there; the highest such. */
function meant(drawing: Drawing, via: Via, x0: number, y0: number, x1: number, y1: number): boolean {
  const { technology } = drawing;
  const rivals = technology.vias.filter(
    (v) => v.stream.layer === via.stream.layer && v.stream.datatype === via.stream.datatype,
  );
  if (rivals.length === 1) return true;
  const landed = rivals.filter((v) =>
    [v.lower, v.upper].every((name) => coveredArea(drawing.sheet(name), x0, y0, x1, y1) > 0),
  );
  const [first, ...others] = landed.length > 0 ? landed : rivals;
  const highest = others.reduce(
    (a, b) => (liesBelow(drawing.layer(a.lower), drawing.layer(b.lower), technology) ? b : a),
    first,
  );
  return highest === via;
}

function enclosure(drawing: Drawing, via: Via): Finding[] {
  const { boxes } = drawing.viaSheet(via.name);
  const limit = nm(via.enclosure_um);
  const findings: Finding[] = [];
  for (let i = 0; i < boxes.x0.length; i++) {
    const [x0, y0, x1, y1] = [boxes.x0[i], boxes.y0[i], boxes.x1[i], boxes.y1[i]];
    if (!meant(drawing, via, x0, y0, x1, y1)) continue;
    for (const layer of [via.lower, via.upper]) {
      const sheet = drawing.sheet(layer);
      const encloses = (by: number) =>
        coveredArea(sheet, x0 - by, y0 - by, x1 + by, y1 + by) === (x1 - x0 + 2 * by) * (y1 - y0 + 2 * by);
      if (encloses(limit)) continue;
      let found = limit - 1;
      while (found >= 0 && !encloses(found)) found--;
      findings.push({
        rule: 'enclosure',
        layer,
        at_um: placeUm((x0 + x1) / 2, (y0 + y1) / 2),
        limit_um: via.enclosure_um,
        ...(found >= 0 ? { found_um: found / 1000 } : {}),
        text:
          found >= 0
            ? `encloses via ${via.name} by ${found / 1000} um, at least ${via.enclosure_um} um wanted`
            : `does not cover via ${via.name}`,
      });
    }
  }
  return findings;
}

function underPlate(drawing: Drawing, via: Via, plates: Region): Finding[] {
  const { technology } = drawing;
  const plate = drawing.layer(technology.roles.topPlate);
  if (technology.viaUnderTopPlate || !liesBelow(drawing.layer(via.upper), plate, technology)) return [];
  const { boxes } = drawing.viaSheet(via.name);
  const findings: Finding[] = [];
  for (let i = 0; i < boxes.x0.length; i++) {
    if (coveredArea(plates, boxes.x0[i], boxes.y0[i], boxes.x1[i], boxes.y1[i]) === 0) continue;
    findings.push({
      rule: 'via-under-plate',
      layer: via.name,
      at_um: placeUm((boxes.x0[i] + boxes.x1[i]) / 2, (boxes.y0[i] + boxes.y1[i]) / 2),
      text: `under the top plate (${plate.name}), where no via may be`,
    });
  }
  return findings;
}

/** Rules of one via: its size, spacing and enclosure, and where it may be. @param topPlates where no via below them may be. */
export const checkVia = (drawing: Drawing, via: Via, topPlates: Region): Finding[] => [
  ...size(drawing, via),
  ...checkViaSpacing(drawing.viaSheet(via.name).slabs, via.name, nm(via.spacing_um)),
  ...enclosure(drawing, via),
  ...underPlate(drawing, via, topPlates),
];
