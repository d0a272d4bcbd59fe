import { execFileSync, spawnSync } from 'node:child_process';
import { mkdirSync, openSync, readFileSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { buildTool, filesBelow, finished, remove, start, temporaryFolder, tool } from './built-tool.js';

let folder: string;
beforeAll(buildTool);
beforeEach(() => {
  folder = temporaryFolder();
});
afterEach(() => {
  remove(folder);
});

const quick = ['place', '--bits', '4', '--effort', 'quick'];
const endings = [
  'cir',
  'extracted.cir',
  'floorplan.json',
  'floorplan.svg',
  'gds',
  'hookup.svg',
  'lef',
  'lvs.cir',
  'metrics.json',
  'mismatch.csv',
  'mismatch.svg',
  'polygons.json',
];
const text = (path: string) => readFileSync(join(folder, path), 'utf8');
const write = (path: string, content: string) => {
  writeFileSync(join(folder, path), content);
};

describe('the built tool as a process', () => {
  it('places an array into a folder beside it', async () => {
    const { code, out, err } = await finished(folder, quick);
    expect({ code, err }).toEqual({ code: 0, err: '' });
    expect(out).toMatch(/^cdac4, 4 bits/);
    expect(filesBelow(folder)).toEqual(endings.map((ending) => `cdac4/cdac4.${ending}`));
  });

  it('prints nothing but JSON with --json', async () => {
    const { code, out, err } = await finished(folder, [...quick, '--json']);
    expect({ code, err }).toEqual({ code: 0, err: '' });
    expect(JSON.parse(out)).toMatchObject({ format: 'steelyard/metrics', name: 'cdac4' });
    expect(out).toBe(text('cdac4/cdac4.metrics.json'));
  });

  it('replaces the files of an earlier run', async () => {
    await finished(folder, [...quick, '--out', 'o']);
    const before = text('o/cdac4.floorplan.json');
    const { code } = await finished(folder, [...quick, '--out', 'o', '--seed', '2']);
    expect(code).toBe(0);
    expect(text('o/cdac4.floorplan.json')).not.toBe(before);
    expect(filesBelow(folder)).toEqual(endings.map((ending) => `o/cdac4.${ending}`));
  });

  it.each([
    [['place', 'missing.json'], 4, /^steelyard: missing\.json could not be read: no such file or folder \(ENOENT\)\n$/],
    [['place', '.'], 4, /^steelyard: \. could not be read: it is a folder \(EISDIR\)\n$/],
    [[...quick, '--out', 'plain/x'], 4, /^steelyard: plain\/x\/.* could not be written: .*no folder/],
    [['place', 'plain'], 2, /^plain:1:1: found an empty file; wanted a JSON object\n$/],
    [['place', '/dev/zero'], 2, /^\/dev\/zero: found more than 128 MiB/],
    [['place', '--bits', '4', '--core', '2x2'], 3, /^steelyard: impossible as asked: /],
    [['plaice'], 2, /^steelyard: found the command "plaice"/],
  ])('steelyard %j ends with %i, says why, and changes nothing', async (args, wanted, said) => {
    write('plain', '');
    const { code, out, err } = await finished(folder, args);
    expect({ code, out }).toEqual({ code: wanted, out: '' });
    expect(err).toMatch(said);
    expect(filesBelow(folder)).toEqual(['plain']);
  });

  it('a set that fails in the middle leaves the former set as it was', async () => {
    await finished(folder, [...quick, '--out', 'o']);
    remove(join(folder, 'o', 'cdac4.hookup.svg'));
    mkdirSync(join(folder, 'o', 'cdac4.hookup.svg'));
    const kept = filesBelow(folder);
    const before = kept.map(text);
    const { code, err } = await finished(folder, [...quick, '--out', 'o', '--seed', '2']);
    expect(code).toBe(4);
    expect(err).toBe('steelyard: o/cdac4.hookup.svg could not be written: it is a folder (EISDIR)\n');
    expect(filesBelow(folder)).toEqual(kept);
    expect(kept.map(text)).toEqual(before);
  });

  it('never writes over its input, whatever name it goes by', async () => {
    await finished(folder, [...quick, '--out', 'o']);
    symlinkSync(join(folder, 'o'), join(folder, 'alias'));
    const before = text('o/cdac4.floorplan.json');
    const { code, err } = await finished(folder, ['place', 'o/cdac4.floorplan.json', '--out', 'alias']);
    expect(code).toBe(2);
    expect(err).toMatch(/^alias\/cdac4\.floorplan\.json: found an input of this run/);
    expect(text('o/cdac4.floorplan.json')).toBe(before);
  });

  it('colours only where a terminal or FORCE_COLOR asks for it, and NO_COLOR wins', async () => {
    const escape = '\u001b[';
    const args = ['place', '--bits', '2', '--floorplan-only'];
    expect((await finished(folder, args)).out).not.toContain(escape);
    expect((await finished(folder, args, { FORCE_COLOR: '1' })).out).toContain(escape);
    expect((await finished(folder, args, { FORCE_COLOR: '1', NO_COLOR: '1' })).out).not.toContain(escape);
  });
});

describe('a reader that goes away', () => {
  it('ends the tool quietly', async () => {
    const { child, ended } = start(folder, ['schema', 'polygons']);
    child.stdout.destroy();
    expect(await ended).toMatchObject({ code: 0, signal: null, err: '' });
  });

  it('takes nothing from the files', async () => {
    const { child, ended } = start(folder, quick);
    child.stdout.destroy();
    expect(await ended).toMatchObject({ code: 0, signal: null, err: '' });
    expect(filesBelow(folder).length).toBe(endings.length);
  });

  it('is not a full disk: that is 4', () => {
    const full = openSync('/dev/full', 'w');
    const { status, stderr } = spawnSync(process.execPath, [tool, 'schema', 'polygons'], {
      stdio: ['ignore', full, 'pipe'],
      encoding: 'utf8',
    });
    expect(status).toBe(4);
    expect(stderr).toBe('steelyard: standard output could not be written: no space left (ENOSPC)\n');
  });
});

const pause = (milliseconds: number) => new Promise((resolve) => setTimeout(resolve, milliseconds));

/** Starts a long search, and resolves when it is surely under way: the array comes through a pipe, so that its reading is seen. */
async function searching(bits: number, wait_ms = 1000) {
  const pipe = join(folder, 'pipe');
  execFileSync('sh', ['-c', 'mkfifo "$0"', pipe]);
  const run = start(folder, ['place', 'pipe', '--out', 'o']);
  await writeFile(pipe, `{"format": "steelyard/array", "version": 1, "bits": ${bits}, "effort": "thorough"}`);
  await pause(wait_ms);
  rmSync(pipe);
  return run;
}

/** Ends a search by Ctrl-C after it has put something by: a slow machine is given more time. */
async function interrupted(bits: number) {
  for (let wait_ms = 2000; ; wait_ms *= 2) {
    const { child, ended } = await searching(bits, wait_ms);
    child.kill('SIGINT');
    const end = await ended;
    if (!end.err.includes('before there was anything to save') || wait_ms > 20_000) return end;
    expect(end.code).toBe(130);
    expect(filesBelow(folder)).toEqual([]);
  }
}

describe('Ctrl-C', () => {
  /** What is saved of 12 bits, too large to be drawn in the time that an interrupted run has. */
  const placementAlone = ['o/cdac12.floorplan.json', 'o/cdac12.metrics.json'];

  it(
    'in a run of 8 bits gives 130 and a whole set of files, which the check accepts',
    { timeout: 180_000 },
    async () => {
      expect(await interrupted(8)).toMatchObject({
        code: 130,
        signal: null,
        err: 'steelyard: interrupted; the best so far is saved\n',
      });
      expect(filesBelow(folder)).toEqual(endings.map((ending) => `o/cdac8.${ending}`));
      expect(JSON.parse(text('o/cdac8.metrics.json')).status).toBe('interrupted');
      const checked = await finished(folder, ['check', 'o/cdac8.floorplan.json', 'o/cdac8.polygons.json']);
      expect(checked).toMatchObject({ code: 0, out: expect.stringMatching(/^no findings\n/), err: '' });
    },
  );

  it('in a run of 12 bits saves the placement alone, which the check accepts', { timeout: 180_000 }, async () => {
    const { code, err } = await interrupted(12);
    expect(code).toBe(130);
    expect(err).toMatch(/^steelyard: interrupted; the best placement so far is saved, without wires; to draw it:/);
    expect(filesBelow(folder)).toEqual(placementAlone);
    expect(JSON.parse(text('o/cdac12.metrics.json')).status).toBe('interrupted');
    const checked = await finished(folder, ['check', 'o/cdac12.floorplan.json']);
    expect(checked).toMatchObject({ code: 0, out: expect.stringMatching(/^no findings\n/) });
  });

  it('twice ends at once; what is there is the whole set or nothing', { timeout: 180_000 }, async () => {
    const { child, ended } = await searching(12);
    child.kill('SIGINT');
    await pause(400);
    child.kill('SIGINT');
    const { code, signal } = await ended;
    expect(code === 130 || signal === 'SIGINT').toBe(true);
    const saved = filesBelow(folder);
    if (saved.length > 0) expect(saved).toEqual(placementAlone);
  });
});
