import { InputError, applyLayerMap, drawFloorplan, netsOf, parseLayerMap, parsePins } from '../index.js';
import type { PinMap, Technology } from '../index.js';
import { UsageError, exit, shown } from './fault.js';
import { drawingFiles, formats } from './files.js';
import type { Format } from './files.js';
import { inFile, readText } from './input.js';
import type { Io } from './io.js';
import { findingLines, lines } from './summary.js';
import { floorplanToDraw, valueOf } from './technology.js';
import type { ToDraw } from './technology.js';

/** The options of `export` as typed. */
export interface ExportFlags {
  readonly to: string;
  readonly out?: string;
  readonly layers?: string;
  readonly pins?: string;
  readonly flat?: boolean;
  readonly stubCell?: boolean;
  readonly devices?: string;
  readonly dummies?: string;
  readonly date?: string;
}

// Known by name so that they are not taken for a slip of the pen.
const laterFormats = ['report'];

const choices = { devices: ['units', 'merged'], dummies: ['include', 'omit'] } as const;
/** The formats that each option has a say in. */
const concerns: Readonly<
  Record<'layers' | 'pins' | 'flat' | 'stubCell' | 'devices' | 'dummies' | 'date', readonly Format[]>
> = {
  layers: ['gds', 'polygons'],
  pins: ['gds', 'svg', 'spice', 'lef'],
  flat: ['gds'],
  stubCell: ['gds'],
  devices: ['spice'],
  dummies: ['spice'],
  date: ['gds'],
};

function chosenFormats(list: string, problems: string[]): readonly Format[] {
  const existing = formats.join(', ');
  const chosen = new Set<Format>();
  for (const word of list.split(',')) {
    const format = formats.find((each) => each === word);
    if (format !== undefined) chosen.add(format);
    else if (laterFormats.includes(word))
      problems.push(`export --to: found ${word}, not available yet; wanted one or more of ${existing}`);
    else problems.push(`export --to: found ${JSON.stringify(word)}; wanted one or more of ${existing}`);
  }
  return [...chosen];
}

function choiceOf<K extends keyof typeof choices>(
  flags: ExportFlags,
  key: K,
  problems: string[],
): (typeof choices)[K][number] | undefined {
  const known: readonly (typeof choices)[K][number][] = choices[key];
  const choice = known.find((each) => each === flags[key]);
  if (flags[key] !== undefined && choice === undefined)
    problems.push(`export --${key}: found ${JSON.stringify(flags[key])}; wanted ${known.join(' or ')}`);
  return choice;
}

/** What the options say, all slips at once. */
function settled(flags: ExportFlags) {
  const problems: string[] = [];
  const chosen = chosenFormats(flags.to, problems);
  const devices = choiceOf(flags, 'devices', problems);
  const dummies = choiceOf(flags, 'dummies', problems);
  for (const [key, of] of Object.entries(concerns))
    if (flags[key as keyof typeof concerns] !== undefined && !of.some((format) => chosen.includes(format)))
      problems.push(
        `export --${key.replace('C', '-c')}: found no file that it changes; wanted --to with ${of.join(' or ')}`,
      );
  if (problems.length > 0) throw new UsageError(problems);
  const { date, flat, stubCell } = flags;
  return {
    chosen,
    options: {
      ...(date !== undefined && { date }),
      ...(flat !== undefined && { flat }),
      ...(stubCell !== undefined && { stubCell }),
      ...(devices !== undefined && { devices }),
      ...(dummies !== undefined && { dummies }),
    },
  };
}

async function withLayers(io: Io, technology: Technology, path: string): Promise<Technology> {
  const mapped = applyLayerMap(technology, valueOf(parseLayerMap(await readText(io, path), path)));
  if (!mapped.ok) throw new InputError(mapped.issues.map((issue) => ({ file: path, ...issue })));
  return mapped.value;
}

async function pinsFrom(io: Io, { floorplan, technology }: ToDraw, path: string): Promise<PinMap> {
  return valueOf(parsePins(await readText(io, path), path, netsOf({ ...floorplan, technology })));
}

/** `export`: the drawing of a floorplan in other formats. */
export async function exportFiles(io: Io, file: string, flags: ExportFlags): Promise<number> {
  const { chosen, options } = settled(flags);
  const own = await floorplanToDraw(io, file, await readText(io, file));
  if (flags.stubCell === true && own.technology.unit.kind !== 'named-cell')
    throw new UsageError([
      `export --stub-cell: found units that are drawn; wanted a technology whose unit is a cell of one's own library`,
    ]);
  const technology = flags.layers === undefined ? own.technology : await withLayers(io, own.technology, flags.layers);
  const pins = flags.pins === undefined ? undefined : await pinsFrom(io, own, flags.pins);
  // Only a netlist asks for the capacitances of the wires.
  const draw = (on: Technology, extracted: boolean) =>
    inFile(file, () => drawFloorplan(own.floorplan, on, { keepHookup: true, extracted }));
  // A map may put two layers on one number: checks, netlists and the abstract tell layers apart by the technology's own.
  const asDrawn = draw(own.technology, chosen.includes('spice'));
  const drawn =
    technology === own.technology
      ? asDrawn
      : { ...draw(technology, false), ...(asDrawn.circuit && { circuit: asDrawn.circuit }) };
  const files = await drawingFiles(drawn, chosen, flags.out ?? drawn.metrics.name, {
    ...options,
    ...(pins && { pins }),
    ...(asDrawn.polygons && { onOwnLayers: asDrawn.polygons }),
  });
  const output = lines(files.map(({ path }) => shown(path)));
  io.writeFiles(files);
  await io.stdout(output);
  const remarks = [...own.notes, ...drawn.notes, ...drawn.warnings, ...findingLines(asDrawn.findings)];
  if (remarks.length > 0) await io.stderr(lines(remarks.map(shown)));
  return asDrawn.findings.length > 0 ? exit.failedCheck : exit.done;
}
