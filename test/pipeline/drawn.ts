import { readFileSync } from 'node:fs';
import { type Drawn, startPlacement } from '../../src/pipeline.js';
import type { ArraySpec } from '../../src/spec/array-spec.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import { resolveArray } from '../../src/spec/resolve.js';
import type { Technology } from '../../src/spec/technology.js';

/** A shipped template. */
export function template(name: string): Technology {
  const file = `templates/${name}.technology.json`;
  const parsed = parseTechnology(readFileSync(file, 'utf8'), file);
  if (!parsed.ok) throw new Error(`the shipped template ${name} does not parse`);
  return parsed.value;
}

export const parallelPlate: Technology = template('parallel-plate');

export type Given = Omit<Partial<ArraySpec>, 'format' | 'version'>;

/** Places, wires, draws and measures an array, in steps of `work`. */
export function drawn(
  given: Given,
  pitch_um?: [number, number],
  work = 1e6,
  technology: Technology = parallelPlate,
): Drawn {
  const array = resolveArray({ format: 'steelyard/array', version: 1, ...given }, technology);
  if (!array.ok) throw new Error(JSON.stringify(array.issues));
  const run = startPlacement({ array: array.value, ...(pitch_um && { floorplanOnly: { pitch_um } }) });
  while (run.step(work));
  return run.finish(false);
}
