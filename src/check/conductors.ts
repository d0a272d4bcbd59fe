import type { Boxes } from '../core/boxes.js';
import { boxesOverlap, DisjointSets, eachJoint } from '../core/components.js';
import { InputError } from '../core/problem.js';
import type { Layer } from '../spec/technology.js';
import type { Drawing } from './drawing.js';
import { conducts, crossedLayers } from './drawing.js';

/** A via that meets material in fewer than two of its layers, with the nodes that it does meet. */
interface LooseVia {
  readonly x: number;
  readonly y: number;
  readonly meets: readonly number[];
}

/**
 * Everything that conducts, as a graph: a node is a rectangle of a conducting layer or of a via, an edge a contact. Pieces are its
 * connected components.
 */
export interface Conductors {
  readonly box: Boxes;
  /** Number of the node's layer in `layers`, or -1 for a via. */
  readonly layerOf: Int16Array;
  readonly layers: readonly Layer[];
  /** Node `base[l] + i` is rectangle i of layer l. */
  readonly base: readonly number[];
  readonly cell: Int32Array;
  readonly piece: Int32Array;
  readonly pieces: number;
  /** Neighbours of node n: neighbour[start[n]] .. neighbour[start[n + 1] - 1]. */
  readonly start: Int32Array;
  readonly neighbour: Int32Array;
  readonly looseVias: readonly LooseVia[];
}

// Drawings have one or two joints a shape. Shapes heaped on each other have one a pair: memory would end before they do.
const mostJoints = (shapes: number): number => Math.min(4_000_000 + 16 * shapes, 50_000_000);

/** @throws InputError for shapes that overlap each other more often than any drawing does. */
export function conductorsOf(drawing: Drawing): Conductors {
  const { technology } = drawing;
  const layers = technology.layers.filter(conducts);
  const sheets = [
    ...layers.map((layer) => drawing.sheet(layer.name)),
    ...technology.vias.map((via) => drawing.viaSheet(via.name)),
  ];
  const base: number[] = [];
  let count = 0;
  for (const sheet of sheets) {
    base.push(count);
    count += sheet.boxes.x0.length;
  }
  const gathered = (column: 'x0' | 'y0' | 'x1' | 'y1' | 'cell') => {
    const all = new Int32Array(count);
    sheets.forEach((sheet, s) => all.set(sheet.boxes[column], base[s]));
    return all;
  };
  const box: Boxes = { x0: gathered('x0'), y0: gathered('y0'), x1: gathered('x1'), y1: gathered('y1') };
  const cell = gathered('cell');
  const layerOf = new Int16Array(count).fill(-1);
  layers.forEach((_, l) => layerOf.fill(l, base[l], base[l] + sheets[l].boxes.x0.length));

  const sets = new DisjointSets(count);
  const ends: number[] = [];
  const most = mostJoints(count);
  const join = (a: number, b: number) => {
    if (ends.length === 2 * most) {
      const found = `${count} shapes that meet each other in more than ${most} places`;
      throw new InputError([{ pointer: '/structures', found, wanted: 'shapes that are not heaped on each other' }]);
    }
    ends.push(a, b);
    sets.join(a, b);
  };
  /** Nodes of a layer that overlap a node. */
  const overlapping = (node: number, l: number): number[] =>
    sheets[l].index
      .search(box.x0[node], box.y0[node], box.x1[node], box.y1[node])
      .map((i) => base[l] + i)
      .filter((other) => boxesOverlap(box, node, box, other));

  layers.forEach((_, l) => eachJoint(sheets[l].boxes, sheets[l].index, (i, j) => join(base[l] + i, base[l] + j)));
  layers.forEach((layer, l) => {
    if (layer.kind !== 'diffusion') return;
    for (const [w, well] of layers.entries())
      if (well.kind === 'well')
        for (let node = base[l]; node < base[l] + sheets[l].boxes.x0.length; node++)
          for (const other of overlapping(node, w)) join(node, other);
  });
  const looseVias: LooseVia[] = [];
  technology.vias.forEach((via, v) => {
    const s = layers.length + v;
    const crossed = crossedLayers(via, drawing).map((layer) => layers.indexOf(layer));
    for (let node = base[s]; node < base[s] + sheets[s].boxes.x0.length; node++) {
      const met = crossed.map((l) => overlapping(node, l));
      const meets = met.flat();
      if (met.filter((nodes) => nodes.length > 0).length > 1) for (const other of meets) join(node, other);
      else looseVias.push({ x: (box.x0[node] + box.x1[node]) / 2, y: (box.y0[node] + box.y1[node]) / 2, meets });
    }
  });

  const start = new Int32Array(count + 1);
  for (const node of ends) start[node + 1]++;
  for (let n = 0; n < count; n++) start[n + 1] += start[n];
  const neighbour = new Int32Array(ends.length);
  const next = start.slice(0, count);
  for (let e = 0; e < ends.length; e += 2) {
    neighbour[next[ends[e]]++] = ends[e + 1];
    neighbour[next[ends[e + 1]]++] = ends[e];
  }
  const { count: pieces, of: piece } = sets.numbered();
  return { box, layerOf, layers, base, cell, piece, pieces, start, neighbour, looseVias };
}
