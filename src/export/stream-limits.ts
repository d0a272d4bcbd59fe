import type { Label, Point, Polygon, Reference } from '../core/layout.js';
import type { Problem } from '../core/problem.js';
import type { Polygons } from '../spec/polygons.js';

/** A record holds 8191 points; one of them closes the outline. */
const MOST_CORNERS = 8190;
const MOST_REPEATS = 0x7fff;
export const LONGEST_NAME = 32;
const LONGEST_LABEL = 512;
const MOST_NUMBER = 255;

export const libraryNameWanted = `1 to ${LONGEST_NAME} characters of A-Z, a-z, 0-9, _, ? and $`;
export const isStreamName = (name: string): boolean => name.length <= LONGEST_NAME && /^[A-Za-z0-9_?$]+$/.test(name);

/** Everything in the drawing that the stream format cannot hold, or that no reader could resolve. */
export function streamProblems(p: Polygons): Problem[] {
  const problems: Problem[] = [];
  const add = (pointer: string, found: string, wanted: string) => problems.push({ pointer, found, wanted });
  const names = new Set<string>();
  const all = new Set(p.structures.map((s) => s.name));

  const number = (value: number, pointer: string) => {
    if (!Number.isInteger(value) || value < 0 || value > MOST_NUMBER)
      add(pointer, String(value), `a whole number 0 to ${MOST_NUMBER}`);
  };
  const points = (xy: readonly Point[], pointer: string) => {
    const at = xy.findIndex(([x, y]) => x !== (x | 0) || y !== (y | 0));
    if (at >= 0) add(`${pointer}/${at}`, `[${String(xy[at])}]`, 'two whole numbers of 32 bits');
  };
  const polygon = (q: Polygon, pointer: string) => {
    number(q.layer, `${pointer}/layer`);
    number(q.datatype, `${pointer}/datatype`);
    if (q.xy.length < 3 || q.xy.length > MOST_CORNERS)
      add(`${pointer}/xy`, `${q.xy.length} corners`, `3 to ${MOST_CORNERS} corners: cut the polygon into smaller ones`);
    points(q.xy, `${pointer}/xy`);
  };
  const reference = (r: Reference, pointer: string) => {
    if (!all.has(r.structure))
      add(`${pointer}/structure`, JSON.stringify(r.structure), 'the name of a structure of this list');
    for (const key of ['columns', 'rows'] as const)
      if (!Number.isInteger(r[key]) || r[key] < 1 || r[key] > MOST_REPEATS)
        add(`${pointer}/${key}`, String(r[key]), `a whole number 1 to ${MOST_REPEATS}`);
    points([r.origin, ...latticeEnds(r)], `${pointer}/origin`);
  };
  const label = (l: Label, pointer: string) => {
    number(l.layer, `${pointer}/layer`);
    number(l.texttype, `${pointer}/texttype`);
    if (l.text.length > LONGEST_LABEL || !/^[\x20-\x7e]+$/.test(l.text))
      add(`${pointer}/text`, JSON.stringify(l.text), `1 to ${LONGEST_LABEL} printable ASCII characters`);
    points([l.xy], `${pointer}/xy`);
  };

  p.structures.forEach((s, i) => {
    const pointer = `/structures/${i}`;
    if (!isStreamName(s.name)) add(`${pointer}/name`, JSON.stringify(s.name), libraryNameWanted);
    if (names.has(s.name)) add(`${pointer}/name`, `${JSON.stringify(s.name)} again`, 'a name for each structure');
    names.add(s.name);
    s.polygons.forEach((q, j) => polygon(q, `${pointer}/polygons/${j}`));
    s.references.forEach((r, j) => reference(r, `${pointer}/references/${j}`));
    s.labels.forEach((l, j) => label(l, `${pointer}/labels/${j}`));
  });
  return problems;
}

/** Where column number `columns` and row number `rows`, the first ones past the array, would have their origins. */
export const latticeEnds = (r: Reference): [Point, Point] => [
  [r.origin[0] + r.columns * r.columnStep[0], r.origin[1] + r.columns * r.columnStep[1]],
  [r.origin[0] + r.rows * r.rowStep[0], r.origin[1] + r.rows * r.rowStep[1]],
];
