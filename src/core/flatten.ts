import type { Boxes } from './boxes.js';
import { BoxList } from './boxes.js';
import type { Label, Point, Polygon, Reference, Structure } from './layout.js';
import { InputError } from './problem.js';
import type { WindingEdges } from './slabs.js';
import { slabsOf } from './slabs.js';

/** More shapes than this in one drawing are refused rather than run out of memory. */
const mostShapes = 0x100_0000;

/** One instance of a reference that says which capacitors its instances are meant to be. */
interface FlatCell {
  /** The capacitor's name, "-" or "=" as in the reference; undefined where the reference's list is too short. */
  readonly name: string | undefined;
  readonly structure: string;
  /** The structure that holds the reference, the number of the reference there and of the instance in its array. */
  readonly parent: string;
  readonly reference: number;
  readonly instance: number;
  readonly column: number;
  readonly row: number;
  /** Where the origin of the referenced structure has come to lie. */
  readonly at: Point;
}

/** All rectangles of one layer, each with the polygon (numbered through the whole drawing) and the cell (or -1) it comes from. */
export interface FlatLayer extends Boxes {
  readonly layer: number;
  readonly datatype: number;
  readonly shape: Int32Array;
  readonly cell: Int32Array;
}

export interface FlatDrawing {
  /** By `streamKey`. */
  readonly layers: ReadonlyMap<string, FlatLayer>;
  readonly cells: readonly FlatCell[];
  /** Where the watched structure has come to lie, each time with the cell (or -1) that it is part of. */
  readonly instances: readonly { readonly place: Place; readonly cell: number }[];
  readonly labels: readonly Label[];
  /** Every placed polygon with its place, in the order of `shape`. */
  readonly shapes: { readonly polygon: readonly Polygon[]; readonly place: readonly Place[] };
}

export const streamKey = (stream: { readonly layer: number; readonly datatype: number }): string =>
  `${stream.layer}/${stream.datatype}`;

/** x' = xx x + xy y + dx, y' = yx x + yy y + dy: mirrored about x or not, turned by quarters, moved. */
export interface Place {
  readonly xx: number;
  readonly xy: number;
  readonly yx: number;
  readonly yy: number;
  readonly dx: number;
  readonly dy: number;
}

export const placed = (p: Place, x: number, y: number): [x: number, y: number] => [
  p.xx * x + p.xy * y + p.dx,
  p.yx * x + p.yy * y + p.dy,
];

const quarterTurns = [
  [1, 0],
  [0, 1],
  [-1, 0],
  [0, -1],
] as const;

function instancePlace(reference: Reference, column: number, row: number): Place {
  const turns = reference.angle_deg / 90;
  if (!Number.isInteger(turns)) throw new RangeError(`an angle of ${reference.angle_deg} degrees is no quarter turn`);
  const [cos, sin] = quarterTurns[((turns % 4) + 4) % 4];
  const flip = reference.mirrored ? -1 : 1;
  return {
    xx: cos,
    xy: -sin * flip,
    yx: sin,
    yy: cos * flip,
    dx: reference.origin[0] + column * reference.columnStep[0] + row * reference.rowStep[0],
    dy: reference.origin[1] + column * reference.columnStep[1] + row * reference.rowStep[1],
  };
}

function within(outer: Place, inner: Place): Place {
  const [dx, dy] = placed(outer, inner.dx, inner.dy);
  return {
    xx: outer.xx * inner.xx + outer.xy * inner.yx,
    xy: outer.xx * inner.xy + outer.xy * inner.yy,
    yx: outer.yx * inner.xx + outer.yy * inner.yx,
    yy: outer.yx * inner.xy + outer.yy * inner.yy,
    dx,
    dy,
  };
}

/** Numbers of the edges of an outline that are neither horizontal nor vertical; edge `i` starts at point `i`. */
export function slantedEdges(xy: readonly Point[]): number[] {
  const slanted: number[] = [];
  for (let i = 0; i < xy.length; i++) {
    const [x, y] = xy[i];
    const [nextX, nextY] = xy[i + 1 < xy.length ? i + 1 : 0];
    if (x !== nextX && y !== nextY) slanted.push(i);
  }
  return slanted;
}

/**
 * An outline as disjoint rectangles: all that it winds around, however often. A slanted edge is taken as an L: along x first, then
 * along y. Costs about n log n in the points and the rectangles.
 */
export function rectanglesOf(xy: readonly Point[]): Boxes {
  const box = asBox(xy);
  if (box) return box;
  const x0: number[] = [];
  const x1: number[] = [];
  const ys: number[] = [];
  const change: number[] = [];
  for (let i = 0; i < xy.length; i++) {
    const [x, y] = xy[i];
    const nextX = xy[i + 1 < xy.length ? i + 1 : 0][0];
    if (nextX === x) continue;
    x0.push(Math.min(x, nextX));
    x1.push(Math.max(x, nextX));
    ys.push(y);
    change.push(nextX > x ? 1 : -1);
  }
  const edges: WindingEdges = {
    x0: Int32Array.from(x0),
    x1: Int32Array.from(x1),
    y: Int32Array.from(ys),
    change: Int8Array.from(change),
  };
  return slabsOf(edges);
}

/** Most shapes are rectangles: four points, each side along an axis. */
function asBox(xy: readonly Point[]): Boxes | undefined {
  if (xy.length !== 4) return undefined;
  const [[ax, ay], [bx, by], [cx, cy], [dx, dy]] = xy;
  const alongX = ay === by && bx === cx && cy === dy && dx === ax;
  const alongY = ax === bx && by === cy && cx === dx && dy === ay;
  if (!(alongX || alongY) || ax === cx || ay === cy) return undefined;
  return {
    x0: Int32Array.of(Math.min(ax, cx)),
    y0: Int32Array.of(Math.min(ay, cy)),
    x1: Int32Array.of(Math.max(ax, cx)),
    y1: Int32Array.of(Math.max(ay, cy)),
  };
}

interface Gathered {
  readonly layer: number;
  readonly datatype: number;
  readonly boxes: BoxList;
  readonly shape: number[];
  readonly cell: number[];
}

/**
 * All shapes and labels of the top structure in its own coordinates: a reference is mirrored about the x axis first, then turned, then
 * moved.
 * @param watched a structure whose instances are listed.
 * @throws InputError if a structure is missing, holds itself, or the drawing has more than 2^24 shapes.
 */
export function flatten(structures: readonly Structure[], topStructure: string, watched?: string): FlatDrawing {
  const byName = new Map(structures.map((s, number) => [s.name, { structure: s, number }]));
  const decomposed = new Map(structures.map((s) => [s, s.polygons.map((p) => rectanglesOf(p.xy))]));
  const gathered = new Map<string, Gathered>();
  const cells: FlatCell[] = [];
  const instances: { place: Place; cell: number }[] = [];
  const labels: Label[] = [];
  const polygon: Polygon[] = [];
  const places: Place[] = [];
  const open = new Set<string>();
  let visited = 0;

  const refuse = (pointer: string, found: string, wanted: string): never => {
    throw new InputError([{ pointer, found, wanted }]);
  };
  const tooMany = (pointer: string) => refuse(pointer, `more than ${mostShapes} shapes`, 'a smaller drawing');
  const layerOf = (p: Polygon): Gathered => {
    const key = streamKey(p);
    let layer = gathered.get(key);
    if (!layer) {
      layer = { layer: p.layer, datatype: p.datatype, boxes: new BoxList(), shape: [], cell: [] };
      gathered.set(key, layer);
    }
    return layer;
  };
  const add = (name: string, place: Place, cell: number, pointer: string) => {
    const entry = byName.get(name) ?? refuse(pointer, `"${name}"`, 'the name of a structure of this file');
    if (open.has(name))
      refuse(pointer, `"${name}", which holds this reference itself`, 'structures that do not hold themselves');
    open.add(name);
    if (name === watched) instances.push({ place, cell });
    const { structure, number } = entry;
    visited += structure.polygons.length + structure.labels.length + 1;
    if (visited > mostShapes) tooMany(pointer);
    const rectangles = decomposed.get(structure)!;
    for (let i = 0; i < structure.polygons.length; i++) {
      const layer = layerOf(structure.polygons[i]);
      const r = rectangles[i];
      for (let k = 0; k < r.x0.length; k++) {
        const [ax, ay] = placed(place, r.x0[k], r.y0[k]);
        const [bx, by] = placed(place, r.x1[k], r.y1[k]);
        layer.boxes.push(Math.min(ax, bx), Math.min(ay, by), Math.max(ax, bx), Math.max(ay, by));
        layer.shape.push(polygon.length);
        layer.cell.push(cell);
      }
      polygon.push(structure.polygons[i]);
      places.push(place);
    }
    for (const label of structure.labels) labels.push({ ...label, xy: placed(place, label.xy[0], label.xy[1]) });
    for (const [index, reference] of structure.references.entries()) {
      // Refused before the first of them is placed: an array can ask for more instances than there is time to count.
      if (visited + reference.columns * reference.rows > mostShapes) tooMany(pointer);
      for (let row = 0; row < reference.rows; row++)
        for (let column = 0; column < reference.columns; column++) {
          const inner = within(place, instancePlace(reference, column, row));
          let innerCell = cell;
          if (reference.cells) {
            const instance = row * reference.columns + column;
            innerCell = cells.length;
            cells.push({
              name: reference.cells[instance],
              structure: reference.structure,
              parent: name,
              reference: index,
              instance,
              column,
              row,
              at: [inner.dx, inner.dy],
            });
          }
          add(reference.structure, inner, innerCell, `/structures/${number}/references/${index}/structure`);
        }
    }
    open.delete(name);
  };
  add(topStructure, { xx: 1, xy: 0, yx: 0, yy: 1, dx: 0, dy: 0 }, -1, '/topStructure');

  const layers = new Map<string, FlatLayer>();
  for (const [key, g] of [...gathered].sort((a, b) => (a[0] < b[0] ? -1 : 1)))
    layers.set(key, {
      ...g.boxes.finish(),
      layer: g.layer,
      datatype: g.datatype,
      shape: Int32Array.from(g.shape),
      cell: Int32Array.from(g.cell),
    });
  return { layers, cells, instances, labels, shapes: { polygon, place: places } };
}
