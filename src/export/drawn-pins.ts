import { flatten, streamKey } from '../core/flatten.js';
import type { FlatDrawing } from '../core/flatten.js';
import { InputError } from '../core/problem.js';
import type { Rectangle } from '../core/rectangle.js';
import type { Polygons } from '../spec/polygons.js';
import type { Layer } from '../spec/technology.js';
import { TOP, VSS } from './drawn-shapes.js';

/** A named place where the block is connected. */
interface PinPlace {
  /** The pin layer. */
  readonly layer: Layer;
  /** What is drawn on the pin layer under the name; empty where nothing is. */
  readonly shape: readonly Rectangle[];
}

export interface DrawnPin {
  /** `B0`..., `TERM`, `TOP` or `VSS`. */
  readonly net: string;
  readonly places: readonly PinPlace[];
}

export interface DrawnBlock {
  readonly flat: FlatDrawing;
  /** The outline's bounding box. */
  readonly block: Rectangle;
  /** From left to right along the bottom edge, then the others from left to right, each net where it is met first. */
  readonly pins: readonly DrawnPin[];
}

/** Every net that has a pin. */
export function netsOf({
  capacitors,
  technology: { underlay },
}: Pick<Polygons, 'capacitors' | 'technology'>): string[] {
  const own = underlay === undefined || underlay.net === VSS ? [] : [underlay.net];
  return [...capacitors.map(({ name }) => name), TOP, VSS, ...own];
}

/**
 * The block and its pins: names on pin layers, with the shapes below them.
 * @throws InputError where the block has no outline, a name is none of the array's nets, or a net has no name
 */
export function drawnBlock(p: Polygons): DrawnBlock {
  const flat = flatten(p.structures, p.topStructure);
  const block = outlineOf(p, flat);
  const problems: { pointer: string; found: string; wanted: string }[] = [];
  const nets = netsOf(p);
  nets.forEach((net, i) => {
    if (nets.indexOf(net) !== i)
      problems.push({
        pointer: '/capacitors',
        found: `net ${JSON.stringify(net)} once more`,
        wanted: 'each net once; TOP and VSS are nets of their own',
      });
  });
  const layerOf = new Map(p.technology.layers.filter((l) => l.kind === 'pin').map((l) => [streamKey(l.stream), l]));

  const found = flat.labels.flatMap(({ text, layer, texttype, xy: [x, y] }) => {
    const key = streamKey({ layer, datatype: texttype });
    const pinLayer = layerOf.get(key);
    if (pinLayer === undefined) return [];
    if (!nets.includes(text)) {
      problems.push({
        pointer: '/structures',
        found: `pin label ${JSON.stringify(text)}`,
        wanted: `one of ${nets.join(', ')}`,
      });
      return [];
    }
    const boxes = flat.layers.get(key);
    const shape: Rectangle[] = [];
    if (boxes !== undefined) {
      const under = new Set<number>();
      boxes.shape.forEach((number, i) => {
        if (boxes.x0[i] <= x && x <= boxes.x1[i] && boxes.y0[i] <= y && y <= boxes.y1[i]) under.add(number);
      });
      boxes.shape.forEach((number, i) => {
        if (under.has(number)) shape.push({ x0: boxes.x0[i], y0: boxes.y0[i], x1: boxes.x1[i], y1: boxes.y1[i] });
      });
    }
    const left = Math.min(x, ...shape.map((r) => r.x0));
    const low = Math.min(y, ...shape.map((r) => r.y0));
    return [{ net: text, place: { layer: pinLayer, shape }, left, inside: low > block.y0 ? 1 : 0 }];
  });
  for (const net of nets)
    if (!found.some((pin) => pin.net === net))
      problems.push({
        pointer: '/structures',
        found: `no pin label ${JSON.stringify(net)}`,
        wanted: 'a name on a pin layer for each net',
      });
  if (problems.length > 0) throw new InputError(problems);

  const places = new Map<string, PinPlace[]>();
  found.sort((a, b) => a.inside - b.inside || a.left - b.left || (a.net < b.net ? -1 : 1));
  for (const { net, place } of found) {
    const others = places.get(net);
    if (others) others.push(place);
    else places.set(net, [place]);
  }
  return { flat, block, pins: [...places].map(([net, of]) => ({ net, places: of })) };
}

function outlineOf({ technology }: Polygons, flat: FlatDrawing): Rectangle {
  const name = technology.roles.boundary;
  const layer = technology.layers.find((l) => l.name === name);
  const boxes = layer && flat.layers.get(streamKey(layer.stream));
  if (boxes === undefined)
    throw new InputError([
      {
        pointer: '/structures',
        found: `nothing on layer ${JSON.stringify(name)}`,
        wanted: "the block's outline there",
      },
    ]);
  const box = { x0: Infinity, y0: Infinity, x1: -Infinity, y1: -Infinity };
  for (let i = 0; i < boxes.x0.length; i++) {
    box.x0 = Math.min(box.x0, boxes.x0[i]);
    box.y0 = Math.min(box.y0, boxes.y0[i]);
    box.x1 = Math.max(box.x1, boxes.x1[i]);
    box.y1 = Math.max(box.y1, boxes.y1[i]);
  }
  return box;
}
