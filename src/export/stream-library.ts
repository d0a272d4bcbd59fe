import { flatten } from '../core/flatten.js';
import type { Reference, Structure } from '../core/layout.js';
import { InputError } from '../core/problem.js';
import { nm } from '../core/units.js';
import type { Polygons } from '../spec/polygons.js';
import { writeStream } from './gdsii.js';
import type { StreamOptions } from './gdsii.js';
import { libraryCellOf } from './library-cell.js';
import { LONGEST_NAME } from './stream-limits.js';

export interface LibraryOptions extends StreamOptions {
  /** Name of the structure that holds them all. */
  readonly topStructure: string;
  /** Between neighbours; 10 um unless told otherwise. */
  readonly gap_um?: number;
}

/**
 * Several drawings in one stream file, side by side from left to right, their lower edges at 0. A structure whose name is taken gets a
 * number behind it: the first drawing keeps all its names.
 * @throws InputError with all that the format cannot hold; where there is no drawing, or their units differ
 */
export function writeStreamLibrary(drawings: readonly Polygons[], options: LibraryOptions): Uint8Array {
  const { topStructure, gap_um = 10, ...rest } = options;
  const [first] = drawings;
  if (first === undefined) throw new InputError([{ pointer: '', found: 'no drawing', wanted: 'one or more' }]);
  const gap = nm(gap_um);
  const taken = new Set([topStructure]);
  const structures: Structure[] = [];
  const references: Reference[] = [];
  let x = 0;
  drawings.forEach((p, i) => {
    if (p.databaseUnit_m !== first.databaseUnit_m || p.userUnit_m !== first.userUnit_m)
      throw new InputError([
        { pointer: '', found: `drawing ${i + 1} in units of its own`, wanted: 'one database unit and one user unit' },
      ]);
    const box = boundsOf(p);
    const names = freeNames(p, taken);
    const nameOf = (name: string) => names.get(name) ?? name;
    for (const s of p.structures) {
      // A library's cell keeps its name and stands for all drawings.
      if (s.name === libraryCellOf(p) && structures.some((other) => other.name === s.name)) continue;
      structures.push({
        ...s,
        name: nameOf(s.name),
        references: s.references.map((r) => ({ ...r, structure: nameOf(r.structure) })),
      });
    }
    references.push({
      structure: nameOf(p.topStructure),
      origin: [x - box.x0, -box.y0],
      columns: 1,
      rows: 1,
      columnStep: [0, 0],
      rowStep: [0, 0],
      mirrored: false,
      angle_deg: 0,
    });
    x += box.x1 - box.x0 + gap;
  });
  const top: Structure = { name: topStructure, polygons: [], references, labels: [] };
  const { technology } = drawings.find((p) => libraryCellOf(p) !== undefined) ?? first;
  return writeStream({ ...first, technology, topStructure, structures: [...structures, top] }, rest);
}

/** A name for each structure of the drawing that is not taken yet; all of them are taken then. */
function freeNames(p: Polygons, taken: Set<string>): Map<string, string> {
  const own = new Set(p.structures.map((s) => s.name).filter((name) => name !== libraryCellOf(p)));
  const names = new Map<string, string>();
  for (const name of own) {
    let free = name;
    for (let number = 2; taken.has(free) || (free !== name && own.has(free)); number++) {
      const ending = `_${number}`;
      free = name.slice(0, LONGEST_NAME - ending.length) + ending;
    }
    taken.add(free);
    names.set(name, free);
  }
  return names;
}

function boundsOf(p: Polygons) {
  const box = { x0: Infinity, y0: Infinity, x1: -Infinity, y1: -Infinity };
  for (const layer of flatten(p.structures, p.topStructure).layers.values())
    for (let i = 0; i < layer.x0.length; i++) {
      box.x0 = Math.min(box.x0, layer.x0[i]);
      box.y0 = Math.min(box.y0, layer.y0[i]);
      box.x1 = Math.max(box.x1, layer.x1[i]);
      box.y1 = Math.max(box.y1, layer.y1[i]);
    }
  return box.x0 < box.x1 ? box : { x0: 0, y0: 0, x1: 0, y1: 0 };
}
