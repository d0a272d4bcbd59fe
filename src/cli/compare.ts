import { basename } from 'node:path';
import { InputError, compare, drawFloorplan, formatJson, parseFloorplan, parseGradientMap } from '../index.js';
import type { Candidate, CompareOptions, Comparison, Floorplan, Problem } from '../index.js';
import { csvOf, tableOf } from './comparison-table.js';
import { UsageError, exit, shown } from './fault.js';
import { inFile, readText } from './input.js';
import type { Io } from './io.js';
import { pitchOf } from './pitch.js';
import { lines } from './summary.js';
import { valueOf } from './technology.js';

/** The options of `compare` as typed. */
export interface CompareFlags {
  readonly pitch?: string;
  readonly gradient?: string;
  readonly correlationLength?: string;
  readonly json?: boolean;
  readonly csv?: boolean;
}

const longest_um = 1e6;

function lengthOf(text: string): number {
  const length = /^\d{1,15}(\.\d{1,12})?$/.test(text) ? Number(text) : NaN;
  if (length <= longest_um) return length;
  const wanted = `a number from 0 to ${longest_um}, in micrometres`;
  throw new InputError([{ pointer: '--correlation-length', found: JSON.stringify(text), wanted }]);
}

async function optionsOf(io: Io, flags: CompareFlags): Promise<CompareOptions> {
  if (flags.json === true && flags.csv === true)
    throw new UsageError(['compare: found both --json and --csv; wanted one of them']);
  const { pitch, gradient, correlationLength } = flags;
  return {
    ...(pitch !== undefined && { pitch: pitch === 'own' ? pitch : pitchOf(pitch, 'own, or ') }),
    ...(correlationLength !== undefined && { correlationLength_um: lengthOf(correlationLength) }),
    ...(gradient !== undefined && { map: valueOf(parseGradientMap(await readText(io, gradient), gradient)) }),
  };
}

async function floorplansIn(io: Io, files: readonly string[]): Promise<readonly Floorplan[]> {
  const problems: Problem[] = [];
  const floorplans: Floorplan[] = [];
  for (const file of files) {
    const parsed = parseFloorplan(await readText(io, file), file);
    if (!parsed.ok) problems.push(...parsed.issues);
    else floorplans.push({ name: basename(file).replace(/(\.floorplan)?\.json$/, ''), ...parsed.value });
  }
  if (problems.length > 0) throw new InputError(problems);
  return floorplans;
}

/** A floorplan that has wires is drawn for what they come to. */
function candidateOf(floorplan: Floorplan, file: string, notes: string[]): Candidate {
  const { hookup, technology } = floorplan;
  if (hookup === undefined || technology === undefined) return { floorplan };
  const { metrics, notes: own } = inFile(file, () => drawFloorplan(floorplan, technology, { keepHookup: true }));
  notes.push(...own.map((note) => `${file}: ${note}`));
  return { floorplan, drawn: metrics };
}

/** What compare finds wrong, at the file that it is about. */
function comparison(candidates: readonly Candidate[], options: CompareOptions, files: readonly string[], map = '') {
  try {
    return compare(candidates, options);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    throw new InputError(
      error.problems.map((problem) => {
        const [, part, index] = problem.pointer.split('/');
        return { ...problem, pointer: '', file: part === 'map' ? map : (files[Number(index)] ?? '') };
      }),
    );
  }
}

/** `compare`: floorplans side by side as a table with sentences, as JSON or as CSV. */
export async function compareFiles(io: Io, files: readonly string[], flags: CompareFlags): Promise<number> {
  const options = await optionsOf(io, flags);
  const floorplans = await floorplansIn(io, files);
  const notes: string[] = [];
  const candidates = floorplans.map((floorplan, i) => candidateOf(floorplan, files[i] ?? '', notes));
  const result: Comparison = comparison(candidates, options, files, flags.gradient);
  if (notes.length > 0) await io.stderr(lines(notes.map(shown)));
  if (flags.json === true) await io.stdout(formatJson(result));
  else if (flags.csv === true) await io.stdout(csvOf(result));
  else await io.stdout(lines(tableOf(result, io)));
  return exit.done;
}
