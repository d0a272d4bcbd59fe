import { readFileSync } from 'node:fs';
import type { Problem, Result } from '../../src/core/problem.js';

const read = (path: string): string => readFileSync(new URL(`../../${path}`, import.meta.url), 'utf8');

/** The text of one file of a small array in every format, drawn by other code. */
export const kiln4 = (file: string): string => read(`test/fixtures/kiln4/${file}`);
export const template = (name: string): string => read(`templates/${name}.technology.json`);
export const sample = (name: string): string => read(`samples/${name}.array.json`);

export function valueOf<T>(result: Result<T>): T {
  if (!result.ok) throw new Error(result.issues.map(line).join('\n'));
  return result.value;
}

/** A problem on one line. */
export const line = ({ pointer, found, wanted }: Problem): string => `${pointer} | ${found} | ${wanted}`;

export const linesOf = (result: Result<unknown>): string[] => (result.ok ? [] : result.issues.map(line));

/** A parsed text with one value replaced, or taken away where it is undefined; the path's last step names it. */
export function changed(text: string, path: readonly (string | number)[], value: unknown): string {
  const root = JSON.parse(text);
  let parent = root;
  for (const step of path.slice(0, -1)) parent = parent[step];
  const last = path.at(-1)!;
  if (value === undefined) delete parent[last];
  else parent[last] = value;
  return JSON.stringify(root, null, 2);
}
