import { flatten, placed } from '../core/flatten.js';
import type { Place } from '../core/flatten.js';
import type { Label, Point, Polygon, Structure } from '../core/layout.js';
import type { Polygons } from '../spec/polygons.js';

/** Called for each polygon of each instance: its net in the array as a whole and its outline in the top structure. */
export type Visit = (polygon: Polygon, net: string, xy: readonly Point[]) => void;

export const TOP = 'TOP';
export const VSS = 'VSS';

/**
 * Every polygon of the drawing where it lies, counter-clockwise whatever was mirrored, with the net that it is meant to carry: inside
 * a unit TOP and BOTTOM are told apart by the `cells` of the reference. Shapes without a net are left out.
 *
 * @returns the labels where they lie.
 * @throws InputError if a structure is missing or holds itself.
 */
export function visitDrawn(p: Polygons, visit: Visit): readonly Label[] {
  const { layers, cells, labels, shapes } = flatten(p.structures, p.topStructure);
  const cellOf = new Int32Array(shapes.polygon.length).fill(-1);
  for (const { shape, cell } of layers.values()) shape.forEach((number, i) => (cellOf[number] = cell[i]));
  shapes.polygon.forEach((polygon, i) => {
    if (polygon.net === undefined) return;
    visit(polygon, unitNet(polygon.net, cells[cellOf[i]]?.name), placedOutline(polygon, shapes.place[i]));
  });
  return labels;
}

function placedOutline({ xy }: Polygon, place: Place): Point[] {
  const outline = xy.map(([x, y]) => placed(place, x, y));
  return place.xx * place.yy - place.xy * place.yx < 0 ? outline.reverse() : outline;
}

/** The drawing in one structure: every shape and every label of it where it lies. */
export function inOneStructure(p: Polygons): Structure {
  const { labels, shapes } = flatten(p.structures, p.topStructure);
  const polygons = shapes.polygon.map((q, i) => ({ ...q, xy: placedOutline(q, shapes.place[i]) }));
  return { name: p.topStructure, polygons, references: [], labels };
}

/** "-" has both plates on ground, "=" its top plate on TOP; every other cell is a capacitor with its top plate on TOP. */
export function unitNet(net: string, cell: string | undefined): string {
  if (net === 'TOP' && cell === '-') return VSS;
  if (net !== 'BOTTOM' || cell === undefined) return net;
  return cell === '-' || cell === '=' ? VSS : cell;
}
