import type { Point, Polygon, Reference, Structure } from '../core/layout.js';
import type { Polygons } from '../spec/polygons.js';

/** Called for each polygon of each instance: its net in the array as a whole and its outline in the top structure. */
export type Visit = (polygon: Polygon, net: string, xy: readonly Point[]) => void;

export const TOP = 'TOP';
export const VSS = 'VSS';

/** Where a structure stands: x' = a x + b y + tx, y' = c x + d y + ty, all whole. */
interface Place {
  readonly a: number;
  readonly b: number;
  readonly c: number;
  readonly d: number;
  readonly tx: number;
  readonly ty: number;
}

const still: Place = { a: 1, b: 0, c: 0, d: 1, tx: 0, ty: 0 };
const quarterTurns = [
  [1, 0],
  [0, 1],
  [-1, 0],
  [0, -1],
] as const;

/**
 * Every polygon of the drawing where it lies, counter-clockwise whatever was mirrored, with the net that it is meant to carry: inside
 * a unit TOP and BOTTOM are told apart by the `cells` of the reference. Shapes without a net are left out.
 */
export function visitDrawn(p: Polygons, visit: Visit): void {
  const structures = new Map(p.structures.map((s) => [s.name, s]));
  const top = structures.get(p.topStructure);
  if (top) visitStructure(structures, top, still, (net) => net, visit);
}

function visitStructure(
  structures: ReadonlyMap<string, Structure>,
  structure: Structure,
  place: Place,
  netOf: (net: string) => string,
  visit: Visit,
): void {
  const mirrored = place.a * place.d - place.b * place.c < 0;
  for (const polygon of structure.polygons) {
    if (polygon.net === undefined) continue;
    const xy = polygon.xy.map((point) => placed(place, point));
    visit(polygon, netOf(polygon.net), mirrored ? xy.reverse() : xy);
  }
  for (const r of structure.references) {
    const inner = structures.get(r.structure);
    if (inner === undefined) continue;
    for (let row = 0; row < r.rows; row++)
      for (let column = 0; column < r.columns; column++) {
        const cell = r.cells?.[row * r.columns + column];
        const within = cell === undefined ? netOf : (net: string) => unitNet(net, cell);
        visitStructure(structures, inner, instance(place, r, row, column), within, visit);
      }
  }
}

const placed = ({ a, b, c, d, tx, ty }: Place, [x, y]: Point): Point => [a * x + b * y + tx, c * x + d * y + ty];

function instance(outer: Place, r: Reference, row: number, column: number): Place {
  const [cos, sin] = quarterTurns[(((r.angle_deg / 90) % 4) + 4) % 4];
  const flip = r.mirrored ? -1 : 1;
  const [tx, ty] = placed(outer, [
    r.origin[0] + column * r.columnStep[0] + row * r.rowStep[0],
    r.origin[1] + column * r.columnStep[1] + row * r.rowStep[1],
  ]);
  const { a, b, c, d } = outer;
  return {
    a: a * cos + b * sin,
    b: (b * cos - a * sin) * flip,
    c: c * cos + d * sin,
    d: (d * cos - c * sin) * flip,
    tx,
    ty,
  };
}

/** "-" has both plates on ground, "=" its top plate on TOP; every other cell is a capacitor with its top plate on TOP. */
function unitNet(net: string, cell: string): string {
  const dummy = cell === '-' || cell === '=';
  if (net === 'TOP') return cell === '-' ? VSS : TOP;
  return net === 'BOTTOM' ? (dummy ? VSS : cell) : net;
}
