import type { Boxes } from '../core/boxes.js';
import { BoxIndex, BoxList } from '../core/boxes.js';
import { boxesJoin, componentsOf, eachJoint } from '../core/components.js';
import type { FlatDrawing, FlatLayer } from '../core/flatten.js';
import { flatten, placed, streamKey } from '../core/flatten.js';
import { type Rectangle, rectangle } from '../core/rectangle.js';
import { nm } from '../core/units.js';
import type { Polygons } from '../spec/polygons.js';
import type { Layer } from '../spec/technology.js';
import { type End, Joints, type Stretches } from './joints.js';
import type { Resistors } from './nodal.js';
import { straightPieces } from './straight-pieces.js';

/** A unit of the array: its number among the cells of the drawing, and the nodes that its terminals are. */
interface UnitNodes {
  readonly cell: number;
  readonly bottom: number;
  readonly top: number;
}

/** The metal of a whole drawing as resistors between nodes, all nets in one. */
export interface WireNetwork extends Resistors {
  readonly layers: readonly Layer[];
  readonly stretches: Stretches;
  readonly units: readonly UnitNodes[];
  /** Nodes under the pin labels. */
  readonly pins: ReadonlyMap<string, readonly number[]>;
  /** Nodes that are joined by vias without a stated resistance. */
  readonly bareVias: readonly { readonly via: string; readonly node: number }[];
}

/** What conducts on one layer: straight pieces of wire, and the shapes of units. A box's body is its number in the joints. */
interface Metal {
  readonly layer: Layer;
  readonly wires: Boxes;
  readonly wireIndex: BoxIndex;
  readonly wireBody: readonly number[];
  readonly shapes: Boxes;
  readonly shapeIndex: BoxIndex;
  readonly shapeBody: readonly number[];
}

/**
 * Resistances of a drawing, from its polygons and its technology alone. A straight wire resists from joint to joint by sheet resistance times
 * length over width, along its centre line: exact where it is straight, half a square too much at a bend. Wires of one layer are joined
 * where they touch, layers by the vias that overlap both. What a unit's own structure draws on one layer is one node where it hangs together:
 * a bottom plate with its tabs, a top plate, a pad. Nets may have loops. What has no resistance stated has none.
 *
 * @throws InputError if the structures cannot be flattened.
 */
export function wireNetwork(p: Polygons): WireNetwork {
  const { technology } = p;
  const flat = flatten(p.structures, p.topStructure, unitStructure(p));
  const joints = new Joints();
  const metals: Metal[] = [];
  for (const layer of technology.layers) {
    const boxes = flat.layers.get(streamKey(layer.stream));
    if (boxes && (layer.kind === 'metal' || layer.kind === 'plate')) {
      metals.push(metalOf(layer, boxes, metals.length, joints));
    }
  }
  const bare: { readonly via: string; readonly end: number }[] = [];
  const named = (name: string | undefined) => metals.find(({ layer }) => layer.name === name);
  for (const metal of metals) joinOnLayer(metal, joints);
  for (const via of technology.vias) {
    const boxes = flat.layers.get(streamKey(via.stream));
    const [lower, upper] = [named(via.lower), named(via.upper)];
    if (!boxes || !lower || !upper) continue;
    for (let i = 0; i < boxes.x0.length; i++) {
      const [below, above] = [landing(lower, boxes, i, joints), landing(upper, boxes, i, joints)];
      if (!below || !above) continue;
      joints.link(below, above, via.resistance_ohm ?? 0);
      if (via.resistance_ohm === undefined) bare.push({ via: via.name, end: below.end });
    }
  }
  const pins = pinEnds(p, flat, named, joints);
  const { terminals } = technology.unit;
  const units = flat.instances.flatMap(({ place, cell }) => {
    const at = (key: 'bottom' | 'top') => {
      const metal = named(terminals[key].layer);
      const [x, y] = terminals[key].at_um;
      const body = metal && shapeAt(metal, ...placed(place, nm(x), nm(y)));
      return body === undefined ? undefined : joints.end(body, rectangle(0, 0, 0, 0)).end;
    };
    const [bottom, top] = [at('bottom'), at('top')];
    return cell < 0 || bottom === undefined || top === undefined ? [] : [{ cell, bottom, top }];
  });

  const { network, stretches, nodeOf } = joints.finish();
  return {
    ...network,
    layers: metals.map(({ layer }) => layer),
    stretches,
    units: units.map(({ cell, bottom, top }) => ({ cell, bottom: nodeOf[bottom], top: nodeOf[top] })),
    pins: new Map([...pins].map(([name, ends]) => [name, ends.map((end) => nodeOf[end])])),
    bareVias: bare.map(({ via, end }) => ({ via, node: nodeOf[end] })),
  };
}

/** The structure in whose coordinates the technology's terminals are. */
function unitStructure({ structures, technology: { unit } }: Polygons): string | undefined {
  if (unit.kind === 'named-cell') return unit.cell;
  return structures.flatMap((s) => s.references).find(({ cells }) => cells !== undefined)?.structure;
}

const boxAt = (b: Boxes, i: number): Rectangle => rectangle(b.x0[i], b.y0[i], b.x1[i], b.y1[i]);

/** What two boxes have in common; of no height or width where they touch. */
const overlap = (a: Rectangle, b: Rectangle): Rectangle =>
  rectangle(Math.max(a.x0, b.x0), Math.max(a.y0, b.y0), Math.min(a.x1, b.x1), Math.min(a.y1, b.y1));

function metalOf(layer: Layer, boxes: FlatLayer, number: number, joints: Joints): Metal {
  const [drawnWires, drawnShapes] = [new BoxList(), new BoxList()];
  boxes.cell.forEach((cell, i) =>
    (cell < 0 ? drawnWires : drawnShapes).push(boxes.x0[i], boxes.y0[i], boxes.x1[i], boxes.y1[i]),
  );
  const wires = straightPieces(drawnWires.finish());
  const shapes = drawnShapes.finish();
  const shapeIndex = new BoxIndex(shapes);
  const { count, of } = componentsOf(shapes, shapeIndex);
  const sheet = layer.sheetResistance_ohm ?? 0;
  const bodies = Array.from({ length: count }, () => joints.addShape());
  return {
    layer,
    wires,
    wireIndex: new BoxIndex(wires),
    wireBody: Array.from(wires.x0, (_, i) => joints.addWire({ ...boxAt(wires, i), layer: number, sheet })),
    shapes,
    shapeIndex,
    shapeBody: Array.from(of, (shape) => bodies[shape]),
  };
}

function joinOnLayer({ wires, wireIndex, wireBody, shapes, shapeBody }: Metal, joints: Joints): void {
  const join = (body: number, other: number, window: Rectangle) =>
    joints.link(joints.end(body, window), joints.end(other, window));
  eachJoint(wires, wireIndex, (i, j) => join(wireBody[i], wireBody[j], overlap(boxAt(wires, i), boxAt(wires, j))));
  for (let s = 0; s < shapes.x0.length; s++) {
    const box = boxAt(shapes, s);
    for (const i of wireIndex.search(box.x0, box.y0, box.x1, box.y1).sort((a, b) => a - b))
      if (boxesJoin(shapes, s, wires, i)) join(shapeBody[s], wireBody[i], overlap(box, boxAt(wires, i)));
  }
}

/** Where a via stands on a layer: on what it overlaps most of, of equals on the first, shapes of units before wires. */
function landing(metal: Metal, vias: Boxes, i: number, joints: Joints): End | undefined {
  const via = boxAt(vias, i);
  let most = 0;
  let found: { readonly body: number; readonly window: Rectangle } | undefined;
  const look = (boxes: Boxes, index: BoxIndex, body: readonly number[]) => {
    for (const j of index.search(via.x0, via.y0, via.x1, via.y1).sort((a, b) => a - b)) {
      const window = overlap(via, boxAt(boxes, j));
      const area = (window.x1 - window.x0) * (window.y1 - window.y0);
      if (area <= most) continue;
      most = area;
      found = { body: body[j], window };
    }
  };
  look(metal.shapes, metal.shapeIndex, metal.shapeBody);
  look(metal.wires, metal.wireIndex, metal.wireBody);
  return found && joints.end(found.body, found.window);
}

/** The ends under the labels on pin layers, by name. */
function pinEnds(
  { technology }: Polygons,
  { labels }: FlatDrawing,
  named: (layer: string | undefined) => Metal | undefined,
  joints: Joints,
): ReadonlyMap<string, readonly number[]> {
  const found = new Map<string, number[]>();
  const metalUnder = new Map(
    technology.layers.filter(({ kind }) => kind === 'pin').map(({ stream, of }) => [streamKey(stream), named(of)]),
  );
  for (const { text, layer, texttype, xy } of labels) {
    const metal = metalUnder.get(streamKey({ layer, datatype: texttype }));
    const [x, y] = xy;
    const wire = metal?.wireIndex.search(x, y, x, y).reduce((a, b) => Math.min(a, b), Infinity);
    const body = metal && (wire !== undefined && wire < Infinity ? metal.wireBody[wire] : shapeAt(metal, x, y));
    if (body === undefined) continue;
    const { end } = joints.end(body, rectangle(x, y, x, y));
    found.set(text, [...(found.get(text) ?? []), end]);
  }
  return found;
}

/** The body of the unit's shape at a point. */
function shapeAt({ shapeIndex, shapeBody }: Metal, x: number, y: number): number | undefined {
  const under = shapeIndex.search(x, y, x, y);
  return under.length === 0 ? undefined : shapeBody[under.reduce((a, b) => Math.min(a, b))];
}
