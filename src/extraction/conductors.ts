import type { Boxes } from '../core/boxes.js';
import { BoxIndex } from '../core/boxes.js';
import { boxesOverlap, DisjointSets, eachJoint } from '../core/components.js';
import type { FlatDrawing } from '../core/flatten.js';
import { flatten, streamKey } from '../core/flatten.js';
import { nm } from '../core/units.js';
import type { Polygons } from '../spec/polygons.js';
import type { Layer, Technology } from '../spec/technology.js';

/** A layer of wires or plates between two heights above the substrate, nm. */
export interface Level {
  readonly name: string;
  readonly z0: number;
  readonly z1: number;
  readonly minSpacing: number;
}

/** The wires and plates of a drawing as rectangles, and what they belong to. */
export interface Conductors {
  readonly box: Boxes;
  /** From the lowest up. */
  readonly levels: readonly Level[];
  /** Number of each rectangle's level. */
  readonly level: Uint8Array;
  /** The capacitors, then `VSS`, then `TOP`. */
  readonly nets: readonly string[];
  /** Number of each rectangle's net. What no pin label names counts as `VSS`. */
  readonly net: Int16Array;
  /** The unit whose own structure each rectangle is of; -1 for wires. */
  readonly cell: Int32Array;
  readonly cells: number;
}

export const VSS = 'VSS';
export const TOP = 'TOP';

/**
 * Levels of a technology's wires and plates.
 * @returns in words what is not known: heights that the technology does not state, or that lie within each other.
 */
export function levelsOf(technology: Technology): readonly Level[] | string {
  const metals = technology.layers.filter(isMetal);
  const bare = metals.filter(({ height_um, thickness_um }) => height_um === undefined || thickness_um === undefined);
  if (bare.length > 0)
    return `technology "${technology.name}" does not state height_um and thickness_um of ${bare.map(({ name }) => name).join(', ')}`;
  const levels = metals
    .map(({ name, height_um = 0, thickness_um = 0, minSpacing_um = 0 }) => {
      return { name, z0: nm(height_um), z1: nm(height_um) + nm(thickness_um), minSpacing: nm(minSpacing_um) };
    })
    .sort((a, b) => a.z0 - b.z0 || a.z1 - b.z1);
  for (const [i, { name, z0 }] of levels.entries()) {
    const below = levels[i - 1] as Level | undefined;
    if (z0 <= (below?.z1 ?? 0))
      return `${name} of technology "${technology.name}" lies no higher than the top of ${below?.name ?? 'the substrate'}`;
  }
  return levels;
}

const isMetal = ({ kind }: Layer): boolean => kind === 'metal' || kind === 'plate';

/**
 * Wires and plates of a drawing with their nets, from its polygons alone: rectangles that touch and layers that vias join are one piece, and
 * a pin label names the piece that it lies on.
 * @param levels as `levelsOf` gives them.
 */
export function conductorsOf(p: Polygons, levels: readonly Level[]): Conductors {
  const { technology } = p;
  const flat = flatten(p.structures, p.topStructure);
  const layers = levels.map(({ name }) => technology.layers.find((layer) => layer.name === name)!);
  const sheets = layers.map(({ stream }) => flat.layers.get(streamKey(stream)));
  const base: number[] = [];
  let count = 0;
  for (const sheet of sheets) {
    base.push(count);
    count += sheet?.x0.length ?? 0;
  }
  const gathered = (column: 'x0' | 'y0' | 'x1' | 'y1' | 'cell'): Int32Array => {
    const all = new Int32Array(count);
    sheets.forEach((sheet, l) => sheet && all.set(sheet[column], base[l]));
    return all;
  };
  const box: Boxes = { x0: gathered('x0'), y0: gathered('y0'), x1: gathered('x1'), y1: gathered('y1') };
  const level = new Uint8Array(count);
  sheets.forEach((sheet, l) => sheet && level.fill(l, base[l], base[l] + sheet.x0.length));

  const indexes = sheets.map((sheet) => sheet && new BoxIndex(sheet));
  const sets = new DisjointSets(count);
  sheets.forEach((sheet, l) => sheet && eachJoint(sheet, indexes[l]!, (i, j) => sets.join(base[l] + i, base[l] + j)));
  for (const via of technology.vias) {
    const drawn = flat.layers.get(streamKey(via.stream));
    const from = levels.findIndex(({ name }) => name === via.lower);
    const to = levels.findIndex(({ name }) => name === via.upper);
    if (!drawn || from === -1) continue;
    for (let i = 0; i < drawn.x0.length; i++) {
      let met = -1;
      for (let l = from; l <= to; l++)
        for (const j of indexes[l]?.search(drawn.x0[i], drawn.y0[i], drawn.x1[i], drawn.y1[i]) ?? []) {
          if (!boxesOverlap(drawn, i, sheets[l]!, j)) continue;
          if (met >= 0) sets.join(met, base[l] + j);
          met = base[l] + j;
        }
    }
  }
  const { count: pieces, of: piece } = sets.numbered();
  const nets = [...p.capacitors.map(({ name }) => name), VSS, TOP];
  const netOfPiece = new Int16Array(pieces).fill(nets.indexOf(VSS));
  for (const { net, node } of namedNodes(flat, technology, levels, indexes, base)) {
    const number = nets.indexOf(net);
    if (number !== -1) netOfPiece[piece[node]] = number;
  }
  const net = Int16Array.from(piece, (of) => netOfPiece[of]);
  return { box, levels, level, nets, net, cell: gathered('cell'), cells: flat.cells.length };
}

/** The rectangles under the labels on pin layers. */
function namedNodes(
  flat: FlatDrawing,
  { layers }: Technology,
  levels: readonly Level[],
  indexes: readonly (BoxIndex | undefined)[],
  base: readonly number[],
): { readonly net: string; readonly node: number }[] {
  const levelOf = new Map(
    layers
      .filter(({ kind }) => kind === 'pin')
      .map(({ stream, of }) => [streamKey(stream), levels.findIndex(({ name }) => name === of)]),
  );
  return flat.labels.flatMap(({ text, layer, texttype, xy: [x, y] }) => {
    const l = levelOf.get(streamKey({ layer, datatype: texttype })) ?? -1;
    const under = l === -1 ? [] : (indexes[l]?.search(x, y, x, y) ?? []);
    return under.length === 0 ? [] : [{ net: text, node: base[l] + under.reduce((a, b) => Math.min(a, b)) }];
  });
}
