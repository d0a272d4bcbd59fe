import type { Place } from '../core/flatten.js';
import { flatten } from '../core/flatten.js';
import type { Reference, Structure } from '../core/layout.js';
import type { Polygons } from '../spec/polygons.js';
import { inOneStructure } from './drawn-shapes.js';

/** Name of the cell that the drawing takes from the user's own library: it is referenced, and its list holds a placeholder alone. */
export const libraryCellOf = ({ technology: { unit } }: Polygons): string | undefined =>
  unit.kind === 'named-cell' ? unit.cell : undefined;

/** The structures of a stream file in which everything that is drawn stands in one, and the library's cell is referenced from there. */
export function flatStructures(p: Polygons): Structure[] {
  const cell = libraryCellOf(p);
  if (cell === undefined) return [inOneStructure(p)];
  const hollow = p.structures.map((s) => (s.name === cell ? { ...s, polygons: [] } : s));
  const { instances } = flatten(hollow, p.topStructure, cell);
  const references = instances.map(({ place }) => referenceTo(cell, place));
  const flat = inOneStructure({ ...p, structures: hollow });
  return [...p.structures.filter((s) => s.name === cell), { ...flat, references }];
}

function referenceTo(structure: string, { xx, xy, yx, yy, dx, dy }: Place): Reference {
  const turns = xx !== 0 ? (xx > 0 ? 0 : 180) : yx > 0 ? 90 : 270;
  return {
    structure,
    origin: [dx, dy],
    columns: 1,
    rows: 1,
    columnStep: [0, 0],
    rowStep: [0, 0],
    mirrored: xx * yy - xy * yx < 0,
    angle_deg: turns,
  };
}
