import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { buildTool, filesBelow, finished, remove, start, temporaryFolder } from './built-tool.js';

let folder: string;
beforeAll(buildTool);
beforeEach(() => {
  folder = temporaryFolder();
});
afterEach(() => {
  remove(folder);
});

const bytes = (below: string): [string, string][] =>
  filesBelow(join(folder, below)).map((file) => [file, readFileSync(join(folder, below, file), 'latin1')]);

// What a thread of the search is: a worker that the thread of the command has started. It dies of this as soon as it runs.
const deadly = `import { isMainThread, threadId } from 'node:worker_threads'; if (!isMainThread && threadId > 1) process.exit(9);`;

describe('the built tool with workers', () => {
  it('writes the same bytes with 1, 2 and 5 of them', { timeout: 180_000 }, async () => {
    for (const workers of ['1', '2', '5']) {
      const args = ['place', '--bits', '8', '--out', workers, '--workers', workers];
      expect(await finished(folder, args)).toMatchObject({ code: 0, err: '' });
    }
    expect(bytes('1').length).toBe(12);
    expect(bytes('2')).toEqual(bytes('1'));
    expect(bytes('5')).toEqual(bytes('1'));
  });

  it('hears Ctrl-C while they work, and saves the best of all', { timeout: 120_000 }, async () => {
    const { child, ended } = start(folder, [
      ...['place', '--bits', '8', '--effort', 'thorough', '--out', 'o', '--workers', '3'],
    ]);
    await pause(4000);
    child.kill('SIGINT');
    expect(await ended).toMatchObject({
      code: 130,
      signal: null,
      err: 'steelyard: interrupted; the best so far is saved\n',
    });
    expect(filesBelow(join(folder, 'o')).length).toBe(12);
    const checked = await finished(folder, ['check', 'o/cdac8.floorplan.json', 'o/cdac8.polygons.json']);
    expect(checked).toMatchObject({ code: 0, out: expect.stringMatching(/^no findings\n/) });
  });

  it('says so in plain words when one of them dies', { timeout: 120_000 }, async () => {
    const preload = `--import data:text/javascript,${encodeURIComponent(deadly)}`;
    const args = ['place', '--bits', '8', '--effort', 'thorough', '--out', 'o', '--workers', '2'];
    const { code, out, err } = await finished(folder, args, { NODE_OPTIONS: preload });
    expect({ code, out }).toEqual({ code: 5, out: '' });
    expect(err).toMatch(/^steelyard: .*a thread of the search ended before its work \(exit code 9\)/);
    expect(err).not.toMatch(/^\s+at /m);
    expect(filesBelow(folder)).toEqual([]);
  });
});
