import { randomBytes } from 'node:crypto';
import {
  chmodSync,
  closeSync,
  copyFileSync,
  fsyncSync,
  linkSync,
  lstatSync,
  mkdirSync,
  openSync,
  readdirSync,
  realpathSync,
  renameSync,
  rmdirSync,
  rmSync,
  statSync,
  writeFileSync,
} from 'node:fs';
import { basename, dirname, join } from 'node:path';
import { FileError } from './fault.js';
import type { OutputFile } from './io.js';

interface Staged {
  readonly path: string;
  readonly target: string;
  readonly temporary: string;
  /** A second name of the file that stood there, until all are in place. */
  former?: string;
  placed: boolean;
}

function quietly(action: () => void): void {
  try {
    action();
  } catch {
    // Tidying up after a failure: the failure itself is what the user has to know.
  }
}

function makeFolder(path: string, created: string[]): void {
  try {
    if (statSync(path).isDirectory()) return;
  } catch {
    makeFolder(dirname(path), created);
  }
  mkdirSync(path);
  created.push(path);
}

// The file behind a link is replaced, not the link; what is no plain file is left alone.
function targetOf(path: string): { target: string; mode?: number } {
  let target: string;
  try {
    target = realpathSync(path);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return { target: path };
    throw error;
  }
  const stats = statSync(target);
  if (stats.isDirectory()) throw Object.assign(new Error(), { code: 'EISDIR' });
  if (!stats.isFile()) throw new Error('it is no plain file');
  return { target, mode: stats.mode & 0o777 };
}

function writeTemporary(temporary: string, content: string | Uint8Array, mode?: number): void {
  const descriptor = openSync(temporary, 'wx');
  try {
    writeFileSync(descriptor, content);
    if (mode !== undefined) chmodSync(temporary, mode);
    fsyncSync(descriptor);
  } finally {
    closeSync(descriptor);
  }
}

function keepFormer(target: string, former: string): string | undefined {
  try {
    linkSync(target, former);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return undefined;
    copyFileSync(target, former);
  }
  return former;
}

function isThere(path: string): boolean {
  try {
    return !lstatSync(path).isDirectory();
  } catch {
    return false;
  }
}

function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return (error as NodeJS.ErrnoException).code !== 'ESRCH';
  }
}

const temporaryName = /^\.(.+)\.((\d+)-[0-9a-f]{8})-\d+\.(?:new|old)$/;

/** Takes away what a run that was killed has left beside these files. */
function sweep(targets: readonly string[], own: string): void {
  for (const folder of new Set(targets.map((target) => dirname(target)))) {
    const ours = new Set(targets.filter((target) => dirname(target) === folder).map((target) => basename(target)));
    quietly(() => {
      for (const name of readdirSync(folder)) {
        const [, of = '', run = '', pid = ''] = temporaryName.exec(name) ?? [];
        // A number may have been given to another process since, to this one for instance.
        const left = Number(pid) === process.pid ? run !== own : !isAlive(Number(pid));
        if (ours.has(of) && left) quietly(() => rmSync(join(folder, name)));
      }
    });
  }
}

/**
 * Writes files as one set: each whole, and either all or none. Folders on the way are made. When they are in place, what of `stale` is
 * there is removed: files of an earlier set that these do not replace.
 *
 * First every file is written beside its target under another name, then all are renamed in one go without a pause in which
 * a signal could be answered. If one fails, those before it are put back.
 * @returns those of `stale` that were there
 * @throws FileError naming the first file that could not be written or removed; everything is as it was then.
 */
export function writeSet(files: readonly OutputFile[], stale: readonly string[] = []): readonly string[] {
  const run = `${process.pid}-${randomBytes(4).toString('hex')}`;
  const created: string[] = [];
  const staged: Staged[] = [];
  let at = '';
  try {
    for (const [index, { path, content }] of files.entries()) {
      at = path;
      makeFolder(dirname(path), created);
      const { target, mode } = targetOf(path);
      const temporary = join(dirname(target), `.${basename(target)}.${run}-${index}.new`);
      staged.push({ path, target, temporary, placed: false });
      writeTemporary(temporary, content, mode);
    }
    for (const file of staged) {
      at = file.path;
      const former = keepFormer(file.target, file.temporary.replace(/new$/, 'old'));
      if (former !== undefined) file.former = former;
      renameSync(file.temporary, file.target);
      file.placed = true;
    }
    const removed = stale.filter(isThere);
    for (const [index, path] of removed.entries()) {
      at = path;
      const former = join(dirname(path), `.${basename(path)}.${run}-${files.length + index}.old`);
      renameSync(path, former);
      staged.push({ path, target: path, temporary: former, former, placed: false });
    }
    for (const { former } of staged) if (former !== undefined) quietly(() => rmSync(former));
    sweep([...staged.map(({ target }) => target), ...stale], run);
    return removed;
  } catch (cause) {
    for (const file of staged.reverse()) {
      const { former, target, temporary } = file;
      if (former !== undefined) quietly(() => renameSync(former, target));
      else if (file.placed) quietly(() => rmSync(target));
      quietly(() => rmSync(temporary, { force: true }));
    }
    for (const folder of created.reverse()) quietly(() => rmdirSync(folder));
    throw new FileError(at, 'written', cause);
  }
}
