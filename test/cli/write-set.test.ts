import { spawnSync } from 'node:child_process';
import {
  chmodSync,
  existsSync,
  linkSync,
  mkdirSync,
  mkdtempSync,
  readFileSync,
  readdirSync,
  rmSync,
  statSync,
  symlinkSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { FileError } from '../../src/cli/fault.js';
import { writeSet } from '../../src/cli/write-set.js';

let folder: string;
const at = (...parts: string[]) => join(folder, ...parts);
const text = (...parts: string[]) => readFileSync(at(...parts), 'utf8');

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'steelyard-set-'));
});
afterEach(() => {
  rmSync(folder, { recursive: true, force: true });
});

describe('a set of files', () => {
  it('is written into folders that it makes, and nothing else is left', () => {
    writeSet([
      { path: at('deep', 'er', 'a.txt'), content: 'one' },
      { path: at('deep', 'b.bin'), content: new Uint8Array([0, 255]) },
    ]);
    expect(text('deep', 'er', 'a.txt')).toBe('one');
    expect([...readFileSync(at('deep', 'b.bin'))]).toEqual([0, 255]);
    expect(readdirSync(at('deep')).sort()).toEqual(['b.bin', 'er']);
    expect(readdirSync(at('deep', 'er'))).toEqual(['a.txt']);
  });

  it('replaces what stood there, keeping its permissions and leaving no second name', () => {
    writeFileSync(at('a.txt'), 'old');
    chmodSync(at('a.txt'), 0o640);
    writeSet([{ path: at('a.txt'), content: 'new' }]);
    expect(text('a.txt')).toBe('new');
    expect(statSync(at('a.txt')).mode & 0o777).toBe(0o640);
    expect(readdirSync(folder)).toEqual(['a.txt']);
  });

  it('replaces the file behind a link, not the link; another name of the old file keeps the old content', () => {
    writeFileSync(at('a.txt'), 'old');
    symlinkSync(at('a.txt'), at('link.txt'));
    linkSync(at('a.txt'), at('other.txt'));
    writeSet([{ path: at('link.txt'), content: 'new' }]);
    expect(text('a.txt')).toBe('new');
    expect(text('link.txt')).toBe('new');
    expect(text('other.txt')).toBe('old');
  });

  it('changes nothing when one of them cannot be written, and names that one', () => {
    writeFileSync(at('a.txt'), 'old');
    mkdirSync(at('b.txt'));
    const files = [
      { path: at('a.txt'), content: 'new' },
      { path: at('made', 'c.txt'), content: 'new' },
      { path: at('b.txt'), content: 'new' },
    ];
    expect(() => writeSet(files)).toThrow(new RegExp(`b\\.txt could not be written: it is a folder \\(EISDIR\\)`));
    expect(text('a.txt')).toBe('old');
    expect(readdirSync(folder).sort()).toEqual(['a.txt', 'b.txt']);
    expect(readdirSync(at('b.txt'))).toEqual([]);
  });

  it('puts back those already in place when a later renaming fails', () => {
    writeFileSync(at('a.txt'), 'old');
    // The second target turns into a folder between the look at it and its renaming: the same path, twice, once as a folder on the way.
    const files = [
      { path: at('a.txt'), content: 'new' },
      { path: at('n.txt'), content: 'new' },
      { path: at('late'), content: 'new' },
      { path: at('late', 'inner.txt'), content: 'new' },
    ];
    expect(() => writeSet(files)).toThrow(FileError);
    expect(text('a.txt')).toBe('old');
    expect(existsSync(at('n.txt'))).toBe(false);
    expect(readdirSync(folder)).toEqual(['a.txt']);
  });

  it('takes away what is stale when it is in place, and says what that was', () => {
    for (const name of ['a.txt', 'b.txt', 'c.txt']) writeFileSync(at(name), 'old');
    mkdirSync(at('d.txt'));
    const removed = writeSet([{ path: at('a.txt'), content: 'new' }], [at('b.txt'), at('d.txt'), at('none.txt')]);
    expect(removed).toEqual([at('b.txt')]);
    expect(readdirSync(folder).sort()).toEqual(['a.txt', 'c.txt', 'd.txt']);
  });

  it('takes away nothing when it fails', () => {
    writeFileSync(at('b.txt'), 'old');
    mkdirSync(at('a.txt'));
    expect(() => writeSet([{ path: at('a.txt'), content: 'new' }], [at('b.txt')])).toThrow(FileError);
    expect(text('b.txt')).toBe('old');
    expect(readdirSync(folder).sort()).toEqual(['a.txt', 'b.txt']);
  });

  it('sweeps up what a process that is no more has left of it, and nothing else', () => {
    const gone = spawnSync(process.execPath, ['-e', '']).pid;
    const others = [
      `.a.txt.${process.ppid}-0123abcd-0.new`,
      `.z.txt.${gone}-0123abcd-0.new`,
      '.a.txt.new',
      '.a.txt.bak',
    ];
    // A process number may be given again, to ours for instance.
    const left = [
      `.a.txt.${gone}-0123abcd-0.new`,
      `.b.txt.${gone}-0123abcd-1.old`,
      `.a.txt.${process.pid}-0123abcd-0.new`,
    ];
    for (const name of [...others, ...left]) writeFileSync(at(name), 'left');
    writeSet([{ path: at('a.txt'), content: 'new' }], [at('b.txt')]);
    expect(readdirSync(folder).sort()).toEqual([...others, 'a.txt'].sort());
  });

  it('says why: no folder on the way, a name too long, a thing that is no file', () => {
    writeFileSync(at('plain'), '');
    const reasonOf = (path: string) => {
      try {
        writeSet([{ path, content: '' }]);
      } catch (error) {
        return (error as Error).message.slice(path.length);
      }
      return '';
    };
    expect(reasonOf(at('plain', 'a.txt'))).toMatch(/^ could not be written: a part of its path is no folder/);
    expect(reasonOf(at('x'.repeat(300)))).toMatch(/^ could not be written: its name is too long/);
    expect(reasonOf('/dev/null')).toBe(' could not be written: it is no plain file');
    expect(readdirSync(folder)).toEqual(['plain']);
  });
});
