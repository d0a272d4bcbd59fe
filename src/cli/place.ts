import { dirname } from 'node:path';
import {
  InputError,
  drawFloorplan,
  drawKept,
  options as settings,
  parseArray,
  resolveArray,
  standardTechnologies,
  startCandidates,
  startPlacement,
} from '../index.js';
import type { ArraySpec, Drawn, Kept, PlaceRequest, Problem, Resumable, StartJob } from '../index.js';
import { countOf, deliverCandidates } from './candidates.js';
import { Crew } from './crew.js';
import { deliver } from './deliver.js';
import { UsageError, exit } from './fault.js';
import { formatOf, inFile, readText } from './input.js';
import type { Io, Rescue } from './io.js';
import { pitchOf } from './pitch.js';
import { floorplanToDraw, technologyNamed, valueOf } from './technology.js';

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
  readonly workers?: string;
  readonly candidates?: string;
  readonly samples?: string;
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

/** Milliseconds between two placements put by: what Ctrl-C loses at most, besides what has no better placement in it. */
const KEEP_EVERY_ms = 200;

/** What is over sooner is not worth starting a thread for. */
const ALONE_ms = 300;
const mostWorkers = 64;

function workersOf({ cores }: Io, text: string | undefined): number {
  const workers = text === undefined ? Math.min(cores, mostWorkers) : /^\d{1,3}$/.test(text) ? Number(text) : NaN;
  if (workers >= 1 && workers <= mostWorkers) return workers;
  const wanted = `a whole number from 1 to ${mostWorkers}`;
  throw new InputError([{ pointer: '--workers', found: JSON.stringify(text), wanted }]);
}

const standardSamples = 100_000;
const mostSamples = 1e9;

/** Arrays to draw for the yield. @param limits those that they are held against */
function samplesOf(text: string | undefined, limits: object | undefined): number {
  if (text === undefined) return standardSamples;
  if (limits === undefined)
    throw new UsageError(['place --samples: found without limits; wanted an array file with "limits"']);
  const samples = /^\d{1,10}$/.test(text) ? Number(text) : NaN;
  if (samples >= 1 && samples <= mostSamples) return samples;
  const wanted = `a whole number from 1 to ${mostSamples}`;
  throw new InputError([{ pointer: '--samples', found: JSON.stringify(text), wanted }]);
}

/** Runs the search to its end, putting by the best so far. What comes out is the same for any number of workers. */
async function search<Job extends StartJob>(
  io: Io,
  run: Resumable<Job>,
  workers: number,
  rescue: () => Rescue,
): Promise<void> {
  const bar = io.stderrIsTerminal ? await io.progressBar('placing') : undefined;
  const crew = new Crew(io, run, workers - 1);
  const begun = io.now();
  try {
    // How much is done at a time follows the clock; what comes out does not depend on it.
    let work = 20_000;
    let kept = -Infinity;
    for (let more = true; more;) {
      await io.breath();
      const start = io.now();
      if (start - begun > ALONE_ms) crew.handOut();
      if (run.waiting) await crew.news();
      else {
        more = run.step(work);
        const spent = io.now() - start;
        if (spent < 20 && work < 1e8) work *= 2;
        else if (spent > 50 && work > 100) work = Math.ceil(work / 2);
      }
      bar?.update(run.progress + crew.progress);
      if (more && start - kept < KEEP_EVERY_ms) continue;
      io.keep(rescue());
      kept = start;
    }
    await io.breath();
  } finally {
    crew.dismiss();
    bar?.stop();
  }
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
      ? await technologyNamed(io, spec.technology ?? standardTechnologies[spec.hookup ?? 'channel'], dirname(file), {
          file,
          pointer: '/technology',
        })
      : await technologyNamed(io, flags.technology, '.', { pointer: '--technology' });
  const array = valueOf(resolveArray(spec, technology, text === undefined ? undefined : { text, file }));
  const pitch_um = flags.pitch === undefined ? spec.core?.pitch_um : pitchOf(flags.pitch);
  const samples = samplesOf(flags.samples, array.spec.limits);
  if (flags.floorplanOnly !== true) return { array, samples };
  return { array, samples, floorplanOnly: pitch_um === undefined ? {} : { pitch_um } };
}

const delivery = ({ out, json }: PlaceFlags) => ({ json: json === true, ...(out !== undefined && { folder: out }) });

/** A floorplan's cells with new wires. */
async function rewired(io: Io, file: string, text: string, flags: PlaceFlags): Promise<Drawn> {
  const idle = [...arrayFlags, 'candidates', 'workers']
    .filter((key) => flags[key as keyof PlaceFlags] !== undefined)
    .map((key) => `--${key}`);
  if (idle.length > 0) {
    const wanted = 'none of them with a floorplan: its cells are kept as they are';
    throw new UsageError([`place: found ${idle.join(', ')}; wanted ${wanted}`]);
  }
  const { floorplan, technology, notes } = await floorplanToDraw(io, file, text, flags.technology);
  const pitch_um = flags.pitch === undefined ? floorplan.core.pitch_um : pitchOf(flags.pitch);
  const wired = flags.floorplanOnly !== true;
  const onPitch = { ...floorplan, core: { ...floorplan.core, pitch_um } };
  const samples = samplesOf(flags.samples, floorplan.array?.limits);
  const drawn = inFile(file, () => drawFloorplan(onPitch, technology, { wired, samples }));
  return { ...drawn, notes: [...notes, ...drawn.notes] };
}

async function placeCandidates(
  io: Io,
  file: string,
  request: PlaceRequest,
  asked: number,
  workers: number,
  rest: Omit<Rescue, 'kept'>,
): Promise<number> {
  const run = inFile(file, () => startCandidates(request, asked));
  const { name } = request.array.spec;
  await search(io, run, workers, () => {
    const kept = run.best();
    return { ...rest, kept: kept[0], candidates: { name, asked, kept } };
  });
  const draw = (kept: Kept): Drawn => drawKept(kept, rest.technology);
  const found = await deliverCandidates(io, run.best(), draw, { ...rest, name, asked });
  return found ? exit.failedCheck : exit.done;
}

const codeOf = ({ findings, missed }: Drawn): number =>
  findings.length + missed.length > 0 ? exit.failedCheck : exit.done;

/** `place`: an array file, a floorplan file or --bits becomes a set of files and a summary. */
export async function place(io: Io, file: string | undefined, flags: PlaceFlags): Promise<number> {
  if (flags.pitch !== undefined && flags.floorplanOnly !== true) {
    const wanted = 'both: wires decide the pitch of what is drawn';
    throw new UsageError([`place --pitch: found without --floorplan-only; wanted ${wanted}`]);
  }
  const text = file === undefined ? undefined : await readText(io, file);
  if (file !== undefined && text !== undefined && formatOf(text) === 'floorplan') {
    const drawn = await rewired(io, file, text, flags);
    await deliver(io, drawn, delivery(flags));
    return codeOf(drawn);
  }
  const workers = workersOf(io, flags.workers);
  const count = flags.candidates === undefined ? undefined : countOf(flags.candidates);
  if (count !== undefined && flags.emphasis !== undefined)
    throw new UsageError([
      'place: found both --emphasis and --candidates; wanted one of them: candidates have them all',
    ]);
  const request = await arrayRequest(io, file ?? '', text, flags);
  const { technology } = request.array;
  const rest = { technology, ...delivery(flags), inputs: [] };
  if (count !== undefined) return placeCandidates(io, file ?? '', request, count, workers, rest);
  const run = inFile(file ?? '', () => startPlacement(request));
  await search(io, run, workers, () => ({ ...rest, kept: run.best(true) }));
  const drawn = run.finish(false);
  await deliver(io, drawn, rest);
  return codeOf(drawn);
}
