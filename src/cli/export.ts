import { InputError, applyLayerMap, drawFloorplan, parseLayerMap } from '../index.js';
import type { Technology } from '../index.js';
import { UsageError, exit, shown } from './fault.js';
import { drawingFiles, formats } from './files.js';
import type { Format } from './files.js';
import { inFile, readText } from './input.js';
import type { Io } from './io.js';
import { findingLines, lines } from './summary.js';
import { floorplanToDraw, valueOf } from './technology.js';

/** The options of `export` as typed. */
export interface ExportFlags {
  readonly to: string;
  readonly out?: string;
  readonly layers?: string;
  readonly date?: string;
}

// Known by name so that they are not taken for a slip of the pen.
const laterFormats = ['spice', 'lef', 'report'];

function chosenFormats(list: string): readonly Format[] {
  const existing = formats.join(', ');
  const chosen = new Set<Format>();
  const lines: string[] = [];
  for (const word of list.split(',')) {
    const format = formats.find((each) => each === word);
    if (format !== undefined) chosen.add(format);
    else if (laterFormats.includes(word))
      lines.push(`export --to: found ${word}, not available yet; wanted one or more of ${existing}`);
    else lines.push(`export --to: found ${JSON.stringify(word)}; wanted one or more of ${existing}`);
  }
  if (lines.length > 0) throw new UsageError(lines);
  return [...chosen];
}

async function withLayers(io: Io, technology: Technology, path: string): Promise<Technology> {
  const mapped = applyLayerMap(technology, valueOf(parseLayerMap(await readText(io, path), path)));
  if (!mapped.ok) throw new InputError(mapped.issues.map((issue) => ({ file: path, ...issue })));
  return mapped.value;
}

/** `export`: the drawing of a floorplan in other formats. */
export async function exportFiles(io: Io, file: string, flags: ExportFlags): Promise<number> {
  const chosen = chosenFormats(flags.to);
  const own = await floorplanToDraw(io, file, await readText(io, file));
  const technology = flags.layers === undefined ? own.technology : await withLayers(io, own.technology, flags.layers);
  const drawn = inFile(file, () => drawFloorplan(own.floorplan, technology, { keepHookup: true }));
  const files = await drawingFiles(drawn, chosen, flags.out ?? drawn.metrics.name, flags.date);
  const output = lines(files.map(({ path }) => shown(path)));
  io.writeFiles(files);
  await io.stdout(output);
  const remarks = [...own.notes, ...drawn.notes, ...drawn.warnings, ...findingLines(drawn.findings)];
  if (remarks.length > 0) await io.stderr(lines(remarks.map(shown)));
  return drawn.findings.length > 0 ? exit.failedCheck : exit.done;
}
