import type { Boxes } from '../core/boxes.js';
import { BoxIndex, BoxList } from '../core/boxes.js';
import { figure } from '../core/figure.js';
import type { Rectangle } from '../core/rectangle.js';
import { differingSlabs, unitedSlabs } from '../core/slabs.js';
import { nm } from '../core/units.js';
import type { Conductors } from './conductors.js';
import type { Drawing } from './drawing.js';
import { placeUm } from './finding.js';
import { extentOf } from './lattice.js';
import type { Unit } from './unit-recognition.js';

/** The unit that sees most otherwise: the area that only it or only the others have around them, and the middle of its largest piece. */
interface Otherwise {
  readonly area_um2: number;
  readonly capacitor: string;
  readonly at_um: readonly [x: number, y: number];
}

/** How alike the units of bits see something. `inside`: with units of bits all around, `edge`: those on the rim of the core. */
export interface Likeness {
  /** Units that see what is most common inside. */
  readonly alike: number;
  /** How many different things units see. */
  readonly kinds: number;
  readonly inside?: Otherwise;
  readonly edge?: Otherwise;
}

interface LayerNeighbourhood {
  readonly layer: string;
  /** The shapes, whatever net they are on. */
  readonly shapes: Likeness;
  /** Those of them that are on the common plate. */
  readonly onTop: Likeness;
}

/** What surrounds the units of bits. */
export interface Neighbourhood {
  /** How far from a unit's edge is looked. */
  readonly reach_um: number;
  readonly units: number;
  /** Conducting layers that are drawn on, in the technology's order. */
  readonly layers: readonly LayerNeighbourhood[];
}

/** A unit of a bit. */
export interface BitUnit extends Unit {
  readonly capacitor: string;
}

/** A unit with all that is within reach of it. Equal surroundings have equal coordinates from its middle. */
interface Viewer extends Rectangle {
  readonly x: number;
  readonly y: number;
  readonly capacitor: string;
  readonly inside: boolean;
}

/**
 * Compares what lies within the technology's proximity reach of each bit's unit, layer by layer: the shapes, and which of them are on the
 * common plate. Wires that go to one unit and not to another differ by their nature; the figures say by how much.
 * @param parts units that are compared with each other. @param onTop whether a node is on the common plate.
 */
export function neighbourhoodOf(
  drawing: Drawing,
  c: Conductors,
  parts: readonly (readonly BitUnit[])[],
  onTop: (node: number) => boolean,
): Neighbourhood {
  const reach_um = drawing.technology.proximityReach_um;
  const viewers = parts.map((units) => viewersOf(units, nm(reach_um)));
  const seen = (slabs: Boxes): Likeness => {
    const index = new BoxIndex(slabs);
    return viewers.map((part) => likeness(part, (viewer) => clipped(slabs, index, viewer))).reduce(together);
  };
  const layers = c.layers.flatMap((layer, l): LayerNeighbourhood[] => {
    const { boxes, slabs } = drawing.sheet(layer.name);
    if (slabs.x0.length === 0) return [];
    const top = new BoxList();
    for (let i = 0; i < boxes.x0.length; i++)
      if (onTop(c.base[l] + i)) top.push(boxes.x0[i], boxes.y0[i], boxes.x1[i], boxes.y1[i]);
    return [{ layer: layer.name, shapes: seen(slabs), onTop: seen(unitedSlabs(top.finish())) }];
  });
  return { reach_um, units: parts.reduce((sum, { length }) => sum + length, 0), layers };
}

function viewersOf(units: readonly BitUnit[], reach: number): Viewer[] {
  const core = { x0: Infinity, y0: Infinity, x1: -Infinity, y1: -Infinity };
  // All look equally far: from the edges of the smallest.
  const own = { left: Infinity, right: Infinity, down: Infinity, up: Infinity };
  for (const unit of units) {
    const { x0, y0, x1, y1 } = extentOf(unit);
    core.x0 = Math.min(core.x0, x0);
    core.y0 = Math.min(core.y0, y0);
    core.x1 = Math.max(core.x1, x1);
    core.y1 = Math.max(core.y1, y1);
    own.left = Math.min(own.left, unit.x - x0);
    own.right = Math.min(own.right, x1 - unit.x);
    own.down = Math.min(own.down, unit.y - y0);
    own.up = Math.min(own.up, y1 - unit.y);
  }
  return units.map(({ x, y, capacitor }) => {
    const [x0, x1] = [x - own.left - reach, x + own.right + reach];
    const [y0, y1] = [y - own.down - reach, y + own.up + reach];
    const inside = x0 >= core.x0 && y0 >= core.y0 && x1 <= core.x1 && y1 <= core.y1;
    return { x, y, capacitor, inside, x0, y0, x1, y1 };
  });
}

/**
 * The part of a region within a viewer's reach, as it sees it. Slabs are maximal along x; those that only something beyond its reach parts
 * are put together again, so that equal regions have equal slabs.
 */
function clipped(slabs: Boxes, index: BoxIndex, { x, y, x0, y0, x1, y1 }: Viewer): Boxes {
  const found = index.search(x0, y0, x1, y1).map((i) => ({
    x0: Math.max(x0, slabs.x0[i]) - x,
    y0: Math.max(y0, slabs.y0[i]) - y,
    x1: Math.min(x1, slabs.x1[i]) - x,
    y1: Math.min(y1, slabs.y1[i]) - y,
  }));
  found.sort((a, b) => a.x0 - b.x0 || a.x1 - b.x1 || a.y0 - b.y0);
  const list = new BoxList();
  let last: Rectangle | undefined;
  const close = () => last && list.push(last.x0, last.y0, last.x1, last.y1);
  for (const slab of found) {
    if (slab.x0 >= slab.x1 || slab.y0 >= slab.y1) continue;
    if (last && last.x0 === slab.x0 && last.x1 === slab.x1 && last.y1 === slab.y0) last = { ...last, y1: slab.y1 };
    else {
      close();
      last = slab;
    }
  }
  close();
  return list.finish();
}

const keyOf = ({ x0, y0, x1, y1 }: Boxes): string => [x0, y0, x1, y1].map((column) => column.join(' ')).join('/');

/** Viewers that see the same. */
interface Group {
  readonly key: string;
  readonly view: Boxes;
  readonly first: Viewer;
  count: number;
}

function likeness(viewers: readonly Viewer[], viewOf: (viewer: Viewer) => Boxes): Likeness {
  const groups = new Map<string, Group>();
  for (const viewer of viewers) {
    const view = viewOf(viewer);
    const key = keyOf(view);
    // Whoever stands inside speaks for none that stands at the edge.
    const own = `${Number(viewer.inside)} ${key}`;
    const group = groups.get(own) ?? { key, view, first: viewer, count: 0 };
    groups.set(own, group);
    group.count++;
  }
  const all = [...groups.values()];
  if (all.length === 0) return { alike: 0, kinds: 0 };
  // Of several that are as common the one that comes first.
  const rank = ({ first, count }: Group) => (first.inside ? viewers.length : 0) + count;
  const usual = all.reduce((a, b) => (rank(b) > rank(a) ? b : a));
  let alike = 0;
  const most: { inside?: Otherwise; edge?: Otherwise } = {};
  for (const { view, first, count } of all) {
    const other = otherwise(usual.view, view, first);
    const where = first.inside ? 'inside' : 'edge';
    if (other === undefined) alike += count;
    else if (other.area_um2 > (most[where]?.area_um2 ?? 0)) most[where] = other;
  }
  return { alike, kinds: new Set(all.map(({ key }) => key)).size, ...most };
}

function otherwise(usual: Boxes, view: Boxes, { x, y, capacitor }: Viewer): Otherwise | undefined {
  const { x0, y0, x1, y1 } = differingSlabs(usual, view);
  let area = 0;
  let largest = 0;
  let piece = -1;
  for (let k = 0; k < x0.length; k++) {
    const own = (x1[k] - x0[k]) * (y1[k] - y0[k]);
    area += own;
    if (own > largest) [largest, piece] = [own, k];
  }
  if (piece < 0) return undefined;
  const at_um = placeUm(x + (x0[piece] + x1[piece]) / 2, y + (y0[piece] + y1[piece]) / 2);
  return { area_um2: figure(area / 1e6), capacitor, at_um };
}

function together(a: Likeness, b: Likeness): Likeness {
  const greater = (one: Otherwise | undefined, other: Otherwise | undefined) =>
    (other?.area_um2 ?? 0) > (one?.area_um2 ?? 0) ? other : one;
  const [inside, edge] = [greater(a.inside, b.inside), greater(a.edge, b.edge)];
  return { alike: a.alike + b.alike, kinds: a.kinds + b.kinds, ...(inside && { inside }), ...(edge && { edge }) };
}
