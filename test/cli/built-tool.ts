import { spawn, spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

export const root = fileURLToPath(new URL('../../', import.meta.url));
export const tool = join(root, 'dist', 'cli', 'main.js');

/** Brings dist/ up to date; does nothing where it is. */
export function buildTool(): void {
  const { status, stdout, stderr } = spawnSync(process.execPath, ['.ci/build.mjs'], { cwd: root, encoding: 'utf8' });
  if (status !== 0) throw new Error(`the build failed: ${stdout}${stderr}`);
}

export const temporaryFolder = (): string => mkdtempSync(join(tmpdir(), 'steelyard-'));
export const remove = (folder: string): void => rmSync(folder, { recursive: true, force: true });
/** Every file below a folder, sorted, hidden ones included. */
export const filesBelow = (folder: string): string[] =>
  readdirSync(folder, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name).slice(folder.length + 1))
    .sort();

// What the surroundings say about colours is none of a test's business.
const env = () => {
  const { NO_COLOR: _no, FORCE_COLOR: _force, ...rest } = process.env;
  return rest;
};

export interface Ended {
  readonly code: number | null;
  readonly signal: NodeJS.Signals | null;
  readonly out: string;
  readonly err: string;
}

/** Starts the built tool in a folder. */
export function start(folder: string, args: readonly string[], more: NodeJS.ProcessEnv = {}) {
  const child = spawn(process.execPath, [tool, ...args], { cwd: folder, env: { ...env(), ...more }, stdio: 'pipe' });
  let out = '';
  let err = '';
  child.stdout.setEncoding('utf8').on('data', (text: string) => (out += text));
  child.stderr.setEncoding('utf8').on('data', (text: string) => (err += text));
  const ended = new Promise<Ended>((resolve, reject) => {
    child.on('error', reject);
    child.on('close', (code, signal) => {
      resolve({ code, signal, out, err });
    });
  });
  return { child, ended };
}

/** Runs the built tool to its end. */
export const finished = (folder: string, args: readonly string[], more?: NodeJS.ProcessEnv): Promise<Ended> =>
  start(folder, args, more).ended;
