import type { Point, Reference, Structure } from '../core/layout.js';
import { rectangle } from '../core/rectangle.js';
import { nm } from '../core/units.js';
import type { Rules } from '../hookup/rules.js';
import { viaBetween } from '../hookup/rules.js';
import type { NamedCellUnit, Technology } from '../spec/technology.js';
import { cellOutline } from '../spec/unit-geometry.js';
import { Sheet } from './sheet.js';

/**
 * The landings of a named cell, which brings its own metal: one over its bottom terminal, carried on straight to the nearest side and there
 * around the outline, so that every side can be hooked to; one over its top terminal. The way around stands off the outline by the largest
 * spacing of its metal and is open at one place, since it must not close.
 *
 *     +----------------------+
 *     |  +----------------+  |
 *     |  |                |  |
 *     |  |     the cell   |  |
 *        |              []===+    the landing, on its way to the nearest side
 *     |  +----------------+  |
 *     +----------------------+
 *
 * @returns the reference to the cell.
 */
export function drawLandings(sheet: Sheet, technology: Technology, unit: NamedCellUnit, rules: Rules): Reference {
  const { roles } = technology;
  const outline = cellOutline(unit);
  const middle = [(outline.x0 + outline.x1) / 2, (outline.y0 + outline.y1) / 2] as const;
  const at = unit.terminals.bottom.at_um;
  const terminal = [nm(at[0]) - middle[0], nm(at[1]) - middle[1]] as const;
  const around = landing([rules.plate[0] / 2, rules.plate[1] / 2], terminal, rules);
  sheet.outline(roles.bottomPlate, around, { net: 'BOTTOM', part: 'plate' });
  if (roles.topPlate !== roles.strap) {
    const via = viaBetween(technology, roles.topPlate, roles.strap);
    const side = nm(via.size_um) / 2 + nm(via.enclosure_um);
    const [x, y] = rules.pad;
    sheet.add(roles.topPlate, rectangle(x - side, y - side, x + side, y + side), { net: 'TOP', part: 'pad' });
  }
  return {
    structure: unit.cell,
    origin: [-middle[0], -middle[1]],
    columns: 1,
    rows: 1,
    columnStep: [0, 0],
    rowStep: [0, 0],
    mirrored: false,
    angle_deg: 0,
  };
}

/** The landing over the bottom terminal and the way around as one outline, counter-clockwise from its lowest, then leftmost point. */
function landing(
  [px, py]: readonly [number, number],
  [x, y]: readonly [number, number],
  { frameWidth: wall, trackWidth, spacing, pad }: Rules,
): Point[] {
  const half = trackWidth / 2;
  const rooms = [px - x, py - y, px + x, py + y];
  // Quarter turns from "to the right" to the nearest side; of equals the first.
  const turns = rooms.indexOf(Math.min(...rooms));
  const turned = ([u, v]: Point, quarters: number): Point => {
    for (let i = 0; i < quarters; i++) [u, v] = [-v, u];
    return [u, v];
  };
  const [tx, ty] = turned([x, y], 4 - turns);
  const [a, b] = turns % 2 === 0 ? [px, py] : [py, px];
  const [ia, ib] = [a - wall, b - wall];
  // Open at the end of the opposite side where nothing hooks on: tabs leave left and right at their levels, wires up and down at the pad.
  const upper = turns % 2 === 1 && (turns === 1 ? pad[0] > 0 : pad[0] < 0);
  const flip = upper ? -1 : 1;
  const path: Point[] = [
    [-a, -b],
    [a, -b],
    [a, b],
    [-a, b],
    [-a, -ib + spacing],
    [-ia, -ib + spacing],
    [-ia, ib],
    [ia, ib],
    [ia, flip * ty + half],
    [tx - half, flip * ty + half],
    [tx - half, flip * ty - half],
    [ia, flip * ty - half],
    [ia, -ib],
    [-a, -ib],
  ];
  const drawn = path.map(([u, v]) => turned([u, flip * v], turns));
  return fromLowest(upper ? drawn.reverse() : drawn);
}

function fromLowest(xy: readonly Point[]): Point[] {
  const first = xy.reduce((a, b) => (b[1] < a[1] || (b[1] === a[1] && b[0] < a[0]) ? b : a));
  const at = xy.indexOf(first);
  return [...xy.slice(at), ...xy.slice(0, at)];
}

/** What stands for the cell where its own library is not at hand: its outline on the marker layer, no metal. */
export function placeholder(technology: Technology, unit: NamedCellUnit): Structure {
  const sheet = new Sheet(technology);
  sheet.add(technology.roles.marker, cellOutline(unit));
  return { name: unit.cell, polygons: sheet.polygons, references: [], labels: [] };
}
