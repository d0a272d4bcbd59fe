import type { Result } from '../core/problem.js';
import { integer, items, record, word } from './loose.js';
import { checkCapacitors } from './parse-floorplan.js';
import { checkTechnology } from './parse-technology.js';
import type { Polygons } from './polygons.js';
import { read } from './read.js';
import type { Report } from './report.js';
import { meant, quoted } from './words.js';

/** Shapes with every reference resolved: what other rooms hold in memory at once. */
const mostShapes = 10_000_000;

const fresh = 0;
const open = 1;
const done = 2;

interface Use {
  readonly at: string;
  readonly child: number;
  readonly instances: number;
}

/** Depth first, without recursion of our own: finds references that close a circle, and counts shapes from the leaves up. */
function checkDepth(
  uses: readonly (readonly Use[])[],
  shapes: number[],
  names: readonly string[],
  report: Report,
): void {
  const state = new Uint8Array(uses.length);
  const next = new Int32Array(uses.length);
  let tooMany = false;
  for (let root = 0; root < uses.length; root++) {
    const path = state[root] === fresh ? [root] : [];
    while (path.length > 0) {
      const structure = path.at(-1)!;
      state[structure] = open;
      const use = uses[structure][next[structure]];
      if (use === undefined) {
        state[structure] = done;
        path.pop();
        continue;
      }
      if (state[use.child] === fresh) {
        path.push(use.child);
        continue;
      }
      next[structure]++;
      if (state[use.child] === open) {
        const chain = [...path.slice(path.indexOf(use.child)), use.child].map((s) => names[s]);
        const shown = chain.length > 6 ? [...chain.slice(0, 5), '...', chain.at(-1)] : chain;
        report.add(`${use.at}/structure`, `a structure within itself: ${shown.join(' > ')}`, 'references that end');
        continue;
      }
      shapes[structure] += use.instances * shapes[use.child];
      if (shapes[structure] > mostShapes && !tooMany) {
        tooMany = true;
        report.add(use.at, `more than ${mostShapes} shapes in ${quoted(names[structure])}`, `${mostShapes} at most`);
      }
    }
  }
}

function check(value: unknown, report: Report): void {
  const polygons = record(value);
  const capacitors = checkCapacitors(polygons.capacitors, report, '/capacitors');
  if (polygons.technology !== undefined) checkTechnology(polygons.technology, report, '/technology');
  const cellNames = new Set([...capacitors, '-', '=']);
  const structures = items(polygons.structures).map(record);
  const names = structures.map((s) => word(s.name) ?? '');
  const indexOf = new Map<string, number>();
  names.forEach((name, i) => {
    if (name === '') return;
    if (indexOf.has(name)) report.add(`/structures/${i}/name`, `${quoted(name)} once more`, 'each structure once');
    else indexOf.set(name, i);
  });
  const known = [...indexOf.keys()];
  const top = word(polygons.topStructure);
  if (top !== undefined && !indexOf.has(top))
    report.add('/topStructure', quoted(top), () => meant(top, known, 'structure'));
  const shapes = structures.map((s) => 1 + items(s.polygons).length); // an instance of an empty one costs too
  const uses = structures.map((structure, s) =>
    items(structure.references).flatMap((given, r): Use[] => {
      const at = `/structures/${s}/references/${r}`;
      const reference = record(given);
      const instances = (integer(reference.rows) ?? 0) * (integer(reference.columns) ?? 0);
      const cells = items(reference.cells);
      if (Array.isArray(reference.cells) && instances > 0 && cells.length !== instances) {
        report.add(`${at}/cells`, `a list of ${cells.length}`, `a list of ${instances}: rows times columns`);
      }
      cells.forEach((cell, i) => {
        const name = word(cell);
        if (name === undefined || cellNames.has(name)) return;
        report.add(`${at}/cells/${i}`, quoted(name), () => meant(name, [...cellNames], 'cell'));
      });
      const name = word(reference.structure);
      if (name === undefined) return [];
      const child = indexOf.get(name);
      if (child !== undefined) return [{ at, child, instances }];
      report.add(`${at}/structure`, quoted(name), () => meant(name, known, 'structure'));
      return [];
    }),
  );
  checkDepth(uses, shapes, names, report);
}

/** Reads a list of polygons (`steelyard/polygons`). Whether the drawing keeps its technology's rules is for the checks. */
export function parsePolygons(text: string, file: string): Result<Polygons> {
  return read('polygons', { text, file }, { refusals: () => [], check });
}
