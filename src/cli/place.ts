import { dirname } from 'node:path';
import {
  InputError,
  drawFloorplan,
  formatMetrics,
  options as settings,
  parseArray,
  resolveArray,
  startPlacement,
} from '../index.js';
import type { ArraySpec, Drawn, PlaceRequest, PlaceRun, Problem } from '../index.js';
import { Interrupted, UsageError, exit, shown } from './fault.js';
import { allFiles } from './files.js';
import { formatOf, inFile, readText } from './input.js';
import type { Io } from './io.js';
import { pitchOf } from './pitch.js';
import { findingLines, lines, summaryOf } from './summary.js';
import { floorplanToDraw, standardTechnology, technologyNamed, valueOf } from './technology.js';

/** The options of `place` as typed. */
export interface PlaceFlags {
  readonly bits?: string;
  readonly out?: string;
  readonly emphasis?: string;
  readonly effort?: string;
  readonly seed?: string;
  readonly core?: string;
  readonly hookup?: string;
  readonly technology?: string;
  readonly rings?: string;
  readonly balance?: string;
  readonly floorplanOnly?: boolean;
  readonly pitch?: string;
  readonly json?: boolean;
}

// What an array file could say too, the technology aside: each flag is the key of the same name.
const arrayFlags = settings.filter(({ key, flag }) => flag !== undefined && key !== 'technology').map(({ key }) => key);

/** A whole number if it is one; anything else goes to the parser as it is and is refused there with its limits. */
const wholeOr = (text: string): number | string => (/^\d{1,15}$/.test(text) ? Number(text) : text);

function coreOf(text: string, problems: Problem[]): unknown {
  const match = /^(\d{1,6})x(\d{1,6})$/i.exec(text);
  if (match !== null) return { rows: Number(match[1]), columns: Number(match[2]) };
  problems.push({ pointer: '--core', found: JSON.stringify(text), wanted: 'ROWSxCOLUMNS, such as 15x17' });
  return undefined;
}

/** The keys that the command line gives, judged by the rules of an array file. */
function specOfFlags(flags: PlaceFlags): Partial<ArraySpec> {
  const problems: Problem[] = [];
  const given: Record<string, unknown> = {};
  for (const key of arrayFlags) {
    const text = flags[key as keyof PlaceFlags];
    if (typeof text === 'string') given[key] = key === 'core' ? coreOf(text, problems) : wholeOr(text);
  }
  // A file needs its bits; here they may come from elsewhere.
  const whole = { format: 'steelyard/array', version: 1, bits: 8, ...given };
  const parsed = parseArray(JSON.stringify(whole), '');
  if (!parsed.ok) {
    for (const { pointer, found, wanted } of parsed.issues) {
      problems.push({ pointer: `--${pointer.split('/')[1] ?? ''}`, found, wanted });
    }
  }
  if (problems.length > 0 || !parsed.ok) throw new InputError(problems);
  return Object.fromEntries(Object.entries(parsed.value).filter(([key]) => key in given));
}

/** The file's keys with those of the command line over them. */
function overlaid(file: ArraySpec, given: Partial<ArraySpec>, technology: string | undefined): ArraySpec {
  const spec = { ...file, ...given, ...(technology === undefined ? {} : { technology }) };
  if (given.bits !== undefined) delete (spec as { weights?: unknown }).weights;
  return spec;
}

/** Whether Ctrl-C was pressed. Heard from the first moment to the last, so that it never leaves half a result. */
interface Ear {
  readonly heard: boolean;
}

/** Runs the search to its end or to Ctrl-C. Returns whether it was cut short. */
async function search(io: Io, run: PlaceRun, ear: Ear): Promise<boolean> {
  const bar = io.stderrIsTerminal ? await io.progressBar('placing') : undefined;
  try {
    // How much is done between two looks at the signals follows the clock; what comes out does not depend on it.
    let work = 20_000;
    for (;;) {
      await io.breath();
      if (ear.heard) break;
      const start = io.now();
      if (!run.step(work)) return false;
      const spent = io.now() - start;
      if (spent < 20 && work < 1e8) work *= 2;
      else if (spent > 50 && work > 1) work = Math.ceil(work / 2);
      bar?.update(run.progress);
    }
  } finally {
    bar?.stop();
  }
  if (!run.started) throw new Interrupted();
  return true;
}

async function arrayRequest(io: Io, file: string, text: string | undefined, flags: PlaceFlags): Promise<PlaceRequest> {
  const given = specOfFlags(flags);
  if (text === undefined && given.bits === undefined) {
    throw new UsageError([
      'place: found neither a file nor --bits; wanted one of them, as in: steelyard place --bits 8',
    ]);
  }
  const base =
    text === undefined ? ({ format: 'steelyard/array', version: 1 } as const) : valueOf(parseArray(text, file));
  const spec = overlaid(base, given, flags.technology);
  const technology =
    flags.technology === undefined
      ? await technologyNamed(io, spec.technology ?? standardTechnology, dirname(file), {
          file,
          pointer: '/technology',
        })
      : await technologyNamed(io, flags.technology, '.', { pointer: '--technology' });
  const array = valueOf(resolveArray(spec, technology, text === undefined ? undefined : { text, file }));
  const pitch_um = flags.pitch === undefined ? spec.core?.pitch_um : pitchOf(flags.pitch);
  if (flags.floorplanOnly !== true) return { array };
  return { array, floorplanOnly: pitch_um === undefined ? {} : { pitch_um } };
}

async function placed(io: Io, file: string, text: string | undefined, flags: PlaceFlags, ear: Ear) {
  const request = await arrayRequest(io, file, text, flags);
  const run = inFile(file, () => startPlacement(request));
  const interrupted = await search(io, run, ear);
  return { drawn: run.finish(interrupted), interrupted };
}

/** A floorplan's cells with new wires. */
async function rewired(io: Io, file: string, text: string, flags: PlaceFlags): Promise<Drawn> {
  const idle = arrayFlags.filter((key) => flags[key as keyof PlaceFlags] !== undefined).map((key) => `--${key}`);
  if (idle.length > 0) {
    const wanted = 'none of them with a floorplan: its cells are kept as they are';
    throw new UsageError([`place: found ${idle.join(', ')}; wanted ${wanted}`]);
  }
  const { floorplan, technology, notes } = await floorplanToDraw(io, file, text, flags.technology);
  const pitch_um = flags.pitch === undefined ? floorplan.core.pitch_um : pitchOf(flags.pitch);
  const wired = flags.floorplanOnly !== true;
  const onPitch = { ...floorplan, core: { ...floorplan.core, pitch_um } };
  const drawn = inFile(file, () => drawFloorplan(onPitch, technology, { wired }));
  return { ...drawn, notes: [...notes, ...drawn.notes] };
}

async function deliver(io: Io, drawn: Drawn, flags: PlaceFlags): Promise<void> {
  const { files, left } = await allFiles(drawn, flags.out ?? drawn.metrics.name);
  const paths = files.map(({ path }) => path);
  const warnings = [...drawn.warnings, ...left];
  const remarks = [...warnings, ...findingLines(drawn.findings)].map(shown);
  const output =
    flags.json === true ? formatMetrics(drawn.metrics) : lines(summaryOf({ ...drawn, warnings }, paths, io));
  io.writeFiles(files);
  await io.stdout(output);
  if (flags.json === true && remarks.length > 0) await io.stderr(lines(remarks));
}

/** `place`: an array file, a floorplan file or --bits becomes a set of files and a summary. */
export async function place(io: Io, file: string | undefined, flags: PlaceFlags): Promise<number> {
  if (flags.pitch !== undefined && flags.floorplanOnly !== true) {
    const wanted = 'both: wires decide the pitch of what is drawn';
    throw new UsageError([`place --pitch: found without --floorplan-only; wanted ${wanted}`]);
  }
  const text = file === undefined ? undefined : await readText(io, file);
  if (file !== undefined && text !== undefined && formatOf(text) === 'floorplan') {
    const drawn = await rewired(io, file, text, flags);
    await deliver(io, drawn, flags);
    return drawn.findings.length > 0 ? exit.failedCheck : exit.done;
  }
  const ear = { heard: false };
  const release = io.onInterrupt(() => {
    ear.heard = true;
  });
  try {
    const { drawn, interrupted } = await placed(io, file ?? '', text, flags, ear);
    await deliver(io, drawn, flags);
    if (interrupted) {
      await io.stderr('steelyard: interrupted; the best so far is saved\n');
      return exit.interrupted;
    }
    return drawn.findings.length > 0 ? exit.failedCheck : exit.done;
  } finally {
    release();
  }
}
