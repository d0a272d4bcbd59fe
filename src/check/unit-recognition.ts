import type { Boxes } from '../core/boxes.js';
import { BoxIndex, BoxList } from '../core/boxes.js';
import { boxesJoin, boxesOverlap, componentsOf } from '../core/components.js';
import { placed } from '../core/flatten.js';
import type { Place } from '../core/flatten.js';
import type { Rectangle } from '../core/rectangle.js';
import { rectangle } from '../core/rectangle.js';
import { unitedSlabs } from '../core/slabs.js';
import { nm } from '../core/units.js';
import type { FramedFingersUnit, NamedCellUnit, ParallelPlateUnit } from '../spec/technology.js';
import type { Side } from './boundary.js';
import { boundaryOf, common } from './boundary.js';
import type { Conductors } from './conductors.js';
import type { Drawing, Sheet } from './drawing.js';
import { coveredArea } from './drawing.js';
import { overlapArea } from './overlap-area.js';
import { surroundingsOf } from './surroundings.js';

/** A capacitor found in a drawing: nodes of either terminal, and the cell (or -1) that it was drawn by. */
export interface Unit {
  readonly top: readonly number[];
  readonly bottom: readonly number[];
  readonly cell: number;
  readonly x: number;
  readonly y: number;
  /** What it covers, as boxes that may overlap. */
  readonly body: readonly Rectangle[];
}

/** What units are recognised by, and what their size is measured by. */
export interface Recognition {
  readonly units: readonly Unit[];
  /** What is wrong with the size of a unit, given with its number; undefined if nothing is. */
  readonly misfit: (unit: Unit, number: number) => string | undefined;
}

/** All units of a drawing, found from its shapes alone: which ones, the technology's kind of unit says. */
export function unitsOf(drawing: Drawing, c: Conductors): Recognition {
  const { unit } = drawing.technology;
  switch (unit.kind) {
    case 'parallel-plate':
      return plates(drawing, c, unit);
    case 'framed-fingers':
      return combs(drawing, c, unit);
    case 'named-cell':
      return instances(drawing, c, unit);
  }
}

const baseOf = (c: Conductors, name: string) => c.base[c.layers.findIndex((layer) => layer.name === name)];

/** The boxes of each connected shape. */
function membersOf(boxes: Boxes, shapes: { readonly count: number; readonly of: Int32Array }): number[][] {
  const members: number[][] = Array.from({ length: shapes.count }, () => []);
  for (let i = 0; i < boxes.x0.length; i++) members[shapes.of[i]].push(i);
  return members;
}

/** A top plate over a bottom plate. */
function plates(drawing: Drawing, c: Conductors, template: ParallelPlateUnit): Recognition {
  const { roles } = drawing.technology;
  const tops = drawing.sheet(roles.topPlate);
  const bottoms = drawing.sheet(roles.bottomPlate);
  const { x0, y0, x1, y1, cell } = tops.boxes;
  const enclosure = nm(template.plateEnclosure_um);
  const units: Unit[] = [];
  for (const part of membersOf(tops.boxes, componentsOf(tops.boxes, tops.index))) {
    const below = new Set<number>();
    for (const i of part)
      for (const j of bottoms.index.search(x0[i], y0[i], x1[i], y1[i]))
        if (boxesOverlap(tops.boxes, i, bottoms.boxes, j)) below.add(j);
    if (below.size === 0) continue;
    const largest = part.reduce((a, b) => (areaOf(tops.boxes, [b]) > areaOf(tops.boxes, [a]) ? b : a));
    units.push({
      top: part.map((i) => baseOf(c, roles.topPlate) + i),
      bottom: [...below].sort((a, b) => a - b).map((j) => baseOf(c, roles.bottomPlate) + j),
      cell: cell[largest],
      x: (x0[largest] + x1[largest]) / 2,
      y: (y0[largest] + y1[largest]) / 2,
      body: part.map((i) => rectangle(x0[i] - enclosure, y0[i] - enclosure, x1[i] + enclosure, y1[i] + enclosure)),
    });
  }
  const meant = nm(template.topPlate_um[0]) * nm(template.topPlate_um[1]);
  const misfit = ({ top, bottom }: Unit) => {
    const area = overlapArea(c.box, top, c.box, bottom);
    return area === meant ? undefined : `plates overlap in ${area / 1e6} um2, exactly ${meant / 1e6} um2 wanted`;
  };
  return { units, misfit };
}

/** An island in a hole of its own metal that is about as large as the inside of the template's frame. */
function combs(drawing: Drawing, c: Conductors, template: FramedFingersUnit): Recognition {
  const metal = drawing.technology.roles.bottomPlate;
  const sheet = drawing.sheet(metal);
  const { boxes } = sheet;
  const shapes = componentsOf(boxes, sheet.index);
  const members = membersOf(boxes, shapes);
  const extents = members.map((own) => extentOf(boxes, own));
  const [gap, width, wall] = [nm(template.gap_um), nm(template.fingerWidth_um), nm(template.frameWidth_um)];
  const fingers = template.fingers;
  const inside = [
    fingers * (2 * gap + width) + (fingers - 1) * width,
    2 * gap + nm(template.barWidth_um) + nm(template.fingerLength_um),
  ];
  const around = surroundingsOf(sheet.slabs);
  const base = baseOf(c, metal);
  const units: Unit[] = [];
  for (const hole of membersOf(around.slabs, componentsOf(around.slabs))) {
    if (around.isOuter(hole)) continue;
    const extent = extentOf(around.slabs, hole);
    if (extent.x1 - extent.x0 > 2 * inside[0] || extent.y1 - extent.y0 > 2 * inside[1]) continue;
    const beside = besideHole(around.slabs, hole, sheet);
    const isIsland = (shape: number) => within(extents[shape], extent);
    // Of several pieces the largest is the comb, the others have come off it.
    const island = [...new Set(beside.map((i) => shapes.of[i]))]
      .filter(isIsland)
      .sort((a, b) => areaOf(boxes, members[b]) - areaOf(boxes, members[a]) || a - b)[0];
    if (island === undefined) continue;
    const { x0, y0, x1, y1 } = extents[island];
    units.push({
      top: members[island].map((i) => base + i),
      bottom: beside.filter((i) => !isIsland(shapes.of[i])).map((i) => base + i),
      cell: boxes.cell[members[island][0]],
      x: (x0 + x1) / 2,
      y: (y0 + y1) / 2,
      body: [rectangle(extent.x0 - wall, extent.y0 - wall, extent.x1 + wall, extent.y1 + wall)],
    });
  }
  // The comb's outline faces the frame all around but for a gap on either side of each of the frame's fingers' ends, along and across.
  const outline = 2 * (inside[0] + inside[1] - 4 * gap) + 2 * (fingers - 1) * nm(template.fingerLength_um);
  const meant = outline - 4 * (fingers - 1) * gap;
  // Trunks below a unit see a plate of its bottom terminal where they would see the comb.
  const { hookup, roles } = drawing.technology;
  const floor = hookup === 'under-plate' && roles.stub !== metal ? drawing.sheet(roles.stub) : undefined;
  const misfit = ({ top, bottom, body: [{ x0, y0, x1, y1 }] }: Unit) => {
    const facing = facingLength(slabsOfNodes(c, top), slabsOfNodes(c, bottom), gap);
    if (facing !== meant)
      return `comb and frame face each other over ${facing / 1000} um, exactly ${meant / 1000} um wanted`;
    const [covered, whole] = [floor && coveredArea(floor, x0, y0, x1, y1), (x1 - x0) * (y1 - y0)];
    if (covered === undefined || covered === whole) return undefined;
    return `the plate on ${roles.stub} covers ${covered / 1e6} um2 under comb and frame, all of ${whole / 1e6} um2 wanted`;
  };
  return { units, misfit };
}

function extentOf({ x0, y0, x1, y1 }: Boxes, own: readonly number[]): Rectangle {
  const extent = { x0: Infinity, y0: Infinity, x1: -Infinity, y1: -Infinity };
  for (const i of own) {
    extent.x0 = Math.min(extent.x0, x0[i]);
    extent.y0 = Math.min(extent.y0, y0[i]);
    extent.x1 = Math.max(extent.x1, x1[i]);
    extent.y1 = Math.max(extent.y1, y1[i]);
  }
  return extent;
}

const within = (a: Rectangle, b: Rectangle): boolean => a.x0 >= b.x0 && a.y0 >= b.y0 && a.x1 <= b.x1 && a.y1 <= b.y1;

const areaOf = ({ x0, y0, x1, y1 }: Boxes, own: readonly number[]): number =>
  own.reduce((sum, i) => sum + (x1[i] - x0[i]) * (y1[i] - y0[i]), 0);

/** The boxes of a sheet that share an edge with a hole of it, in order. */
function besideHole(slabs: Boxes, hole: readonly number[], { boxes, index }: Sheet): number[] {
  const found = new Set<number>();
  for (const i of hole)
    for (const j of index.search(slabs.x0[i], slabs.y0[i], slabs.x1[i], slabs.y1[i]))
      if (boxesJoin(slabs, i, boxes, j)) found.add(j);
  return [...found].sort((a, b) => a - b);
}

function slabsOfNodes({ box }: Conductors, nodes: readonly number[]): Boxes {
  const list = new BoxList();
  for (const node of nodes) list.push(box.x0[node], box.y0[node], box.x1[node], box.y1[node]);
  return unitedSlabs(list.finish());
}

/** The length over which two regions look straight at each other across exactly this gap. */
function facingLength(one: Boxes, other: Boxes, gap: number): number {
  const [a, b] = [boundaryOf(one), boundaryOf(other)];
  const across = (side: Side, by: number, opposite: Side): number => {
    const { from, to } = common({ ...side, at: side.at.map((at) => at + by) }, opposite);
    return to.reduce((sum, end, i) => sum + end - from[i], 0);
  };
  return (
    across(a.right, gap, b.left) +
    across(a.left, -gap, b.right) +
    across(a.top, gap, b.bottom) +
    across(a.bottom, -gap, b.top)
  );
}

/** An instance of the named cell with a landing over each of its terminals. */
function instances(drawing: Drawing, c: Conductors, template: NamedCellUnit): Recognition {
  const { terminals } = template;
  const [low, high] = template.outline_um.map(([x, y]) => [nm(x), nm(y)] as const);
  const units: Unit[] = [];
  const places: Place[] = [];
  const outlines = new BoxList();
  for (const { place, cell } of drawing.flat.instances) {
    const at = (key: 'bottom' | 'top') => {
      const { layer, at_um } = terminals[key];
      const [x, y] = placed(place, nm(at_um[0]), nm(at_um[1]));
      const nodes = drawing.sheet(layer).index.search(x, y, x, y);
      return nodes.sort((a, b) => a - b).map((i) => baseOf(c, layer) + i);
    };
    const [bottom, top] = [at('bottom'), at('top')];
    if (bottom.length === 0 || top.length === 0) continue;
    const [ax, ay] = placed(place, low[0], low[1]);
    const [bx, by] = placed(place, high[0], high[1]);
    const body = rectangle(Math.min(ax, bx), Math.min(ay, by), Math.max(ax, bx), Math.max(ay, by));
    const [x, y] = [(body.x0 + body.x1) / 2, (body.y0 + body.y1) / 2];
    units.push({ top, bottom, cell, x, y, body: [body] });
    places.push(place);
    outlines.push(body.x0, body.y0, body.x1, body.y1);
  }
  const bodies = outlines.finish();
  const index = new BoxIndex(bodies);
  const misfit = (unit: Unit, own: number) => {
    const place = places[own];
    const [{ x0, y0, x1, y1 }] = unit.body;
    if (index.search(x0, y0, x1, y1).some((other) => other !== own && boxesOverlap(bodies, own, bodies, other)))
      return 'the outline overlaps that of another unit';
    for (const { layer, at_um } of [terminals.bottom, terminals.top]) {
      const half = Math.floor(nm(drawing.layer(layer).minWidth_um ?? 0) / 2);
      const [x, y] = placed(place, nm(at_um[0]), nm(at_um[1]));
      const covered = coveredArea(drawing.sheet(layer), x - half, y - half, x + half, y + half);
      if (covered === 4 * half * half) continue;
      const wanted = `${(4 * half * half) / 1e6} um2 wanted`;
      return `the landing covers ${covered / 1e6} um2 around the terminal on ${layer}, ${wanted}`;
    }
    return undefined;
  };
  return { units, misfit };
}
