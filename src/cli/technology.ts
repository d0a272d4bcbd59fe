import { isAbsolute, join } from 'node:path';
import { InputError, parseFloorplan, parseTechnology, resolveArray, standardTechnologies } from '../index.js';
import type { Floorplan, Problem, Result, Technology } from '../index.js';
import { FileError } from './fault.js';
import { readText } from './input.js';
import type { Io } from './io.js';

const ending = '.technology.json';
const folder = (io: Io) => join(io.root, 'templates');

/** The value of a result, or its problems as the error that ends the run. */
export function valueOf<T>(result: Result<T>): T {
  if (!result.ok) throw new InputError(result.issues);
  return result.value;
}

/** Names of the shipped technology templates, sorted. */
export async function templateNames(io: Io): Promise<readonly string[]> {
  let files: readonly string[];
  try {
    files = await io.listFolder(folder(io));
  } catch (cause) {
    throw new FileError(folder(io), 'read', cause);
  }
  return files
    .filter((file) => file.endsWith(ending))
    .map((file) => file.slice(0, -ending.length))
    .sort();
}

/** The text of a shipped template, undefined if there is none of that name. */
export async function templateText(io: Io, name: string): Promise<string | undefined> {
  const names = await templateNames(io);
  return names.includes(name) ? readText(io, join(folder(io), name + ending)) : undefined;
}

/**
 * The technology that a name or a file (ending in .json, from the folder `beside`) stands for.
 * @throws InputError: at `where` if there is no such template, else with what is wrong in the file; FileError.
 */
export async function technologyNamed(
  io: Io,
  reference: string,
  beside: string,
  where: Pick<Problem, 'file' | 'pointer'>,
): Promise<Technology> {
  if (reference.endsWith('.json')) {
    const path = isAbsolute(reference) ? reference : join(beside, reference);
    return valueOf(parseTechnology(await readText(io, path), path));
  }
  const text = await templateText(io, reference);
  if (text === undefined) {
    const names = (await templateNames(io)).join(', ');
    const wanted = `a shipped template (${names}) or a file that ends in .json`;
    throw new InputError([{ ...where, found: JSON.stringify(reference), wanted }]);
  }
  return valueOf(parseTechnology(text, reference + ending));
}

/** The floorplan as if its array had been resolved for another technology: what came from the former one comes from the new one. */
function movedTo(floorplan: Floorplan, technology: Technology): Floorplan {
  if (floorplan.array === undefined) return floorplan;
  const {
    unit_fF: _unit,
    hookup,
    mismatch: _mismatch,
    technology: _name,
    gradient,
    tracksPerChannel,
    ...own
  } = floorplan.array;
  const expected = JSON.stringify(gradient) === JSON.stringify(floorplan.technology?.gradient);
  // Tracks of a channel say nothing of trunks below a column.
  const keepsTracks = tracksPerChannel !== undefined && hookup === technology.hookup;
  const spec = {
    ...own,
    ...(gradient !== undefined && !expected && { gradient }),
    ...(keepsTracks && { tracksPerChannel }),
  };
  return { ...floorplan, array: valueOf(resolveArray(spec, technology)).spec };
}

export interface ToDraw {
  readonly floorplan: Floorplan;
  readonly technology: Technology;
  /** What the user should know about the choice of the technology. */
  readonly notes: readonly string[];
}

/**
 * A floorplan file's content with the technology to draw it in: the one named, else its own, else the standard template.
 * @throws InputError with all that is wrong in the file; FileError
 */
export async function floorplanToDraw(io: Io, file: string, text: string, named?: string): Promise<ToDraw> {
  const floorplan = valueOf(parseFloorplan(text, file));
  if (named === undefined && floorplan.technology !== undefined) {
    return { floorplan, technology: floorplan.technology, notes: [] };
  }
  const { array, hookup } = floorplan;
  const standard = standardTechnologies[array?.hookup ?? (hookup?.columns === undefined ? 'channel' : 'under-plate')];
  const technology = await technologyNamed(io, named ?? standard, '.', { pointer: '--technology' });
  const notes = named === undefined ? [`The floorplan brings no technology; it is drawn in ${standard}.`] : [];
  return { floorplan: movedTo(floorplan, technology), technology, notes };
}
