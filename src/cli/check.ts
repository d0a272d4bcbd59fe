import {
  InputError,
  checkFloorplan,
  comparePolygons,
  drawFloorplan,
  formatJson,
  judgePolygons,
  parseFloorplan,
  parsePolygons,
} from '../index.js';
import type { Finding, Neighbourhood } from '../index.js';
import { UsageError, exit, shown } from './fault.js';
import { formatOf, inFile, readText } from './input.js';
import type { Io } from './io.js';
import { neighbourhoodTable } from './neighbourhood.js';
import { findingLines, lines } from './summary.js';
import { floorplanToDraw, valueOf } from './technology.js';

/** The options of `check` as typed. */
export interface CheckFlags {
  readonly json?: boolean;
}

interface Verdict {
  readonly findings: readonly Finding[];
  readonly neighbourhood?: Neighbourhood;
  readonly notes: readonly string[];
}

/** The floorplan's drawing, made for the purpose. */
async function checkDrawn(io: Io, file: string, text: string): Promise<Verdict> {
  const { floorplan, technology, notes } = await floorplanToDraw(io, file, text);
  const drawn = inFile(file, () => drawFloorplan(floorplan, technology, { keepHookup: true, extracted: false }));
  const { findings, neighbourhood } = drawn;
  return { findings, ...(neighbourhood && { neighbourhood }), notes: [...notes, ...drawn.notes] };
}

function checkBoth(file: string, text: string, polygonsFile: string, polygonsText: string): Verdict {
  const floorplan = parseFloorplan(text, file);
  const polygons = parsePolygons(polygonsText, polygonsFile);
  if (!floorplan.ok || !polygons.ok) {
    throw new InputError([floorplan, polygons].flatMap((result) => (result.ok ? [] : result.issues)));
  }
  const judged = inFile(polygonsFile, () => judgePolygons(polygons.value));
  const findings = [
    ...checkFloorplan(floorplan.value),
    ...judged.findings,
    ...comparePolygons(polygons.value, floorplan.value),
  ];
  return { ...judged, findings, notes: [] };
}

async function verdict(io: Io, file: string, polygonsFile: string | undefined): Promise<Verdict> {
  const text = await readText(io, file);
  const isPolygons = formatOf(text) === 'polygons';
  if (polygonsFile === undefined) {
    if (!isPolygons) return checkDrawn(io, file, text);
    const polygons = valueOf(parsePolygons(text, file));
    return { ...inFile(file, () => judgePolygons(polygons)), notes: [] };
  }
  if (isPolygons) throw new UsageError(['check: found a polygons file first; wanted the floorplan, then its polygons']);
  return checkBoth(file, text, polygonsFile, await readText(io, polygonsFile));
}

/** `check`: findings on a drawing, as a table or as JSON; exit code 1 where there are any. */
export async function check(
  io: Io,
  file: string,
  polygonsFile: string | undefined,
  flags: CheckFlags,
): Promise<number> {
  const { findings, neighbourhood, notes } = await verdict(io, file, polygonsFile);
  if (notes.length > 0) await io.stderr(lines(notes.map(shown)));
  // How alike surroundings are is worth a look where nothing is wrong.
  const sound = ['no findings', ...(neighbourhood === undefined ? [] : neighbourhoodTable(neighbourhood))];
  const said = findings.length === 0 ? sound : findingLines(findings);
  if (flags.json === true) await io.stdout(formatJson({ findings, neighbourhood }));
  else await io.stdout(lines(said.map(shown)));
  return findings.length > 0 ? exit.failedCheck : exit.done;
}
