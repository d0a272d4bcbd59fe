import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { buildTool, filesBelow, finished, remove, start, temporaryFolder } from './built-tool.js';
import { Dice } from './hostile-inputs.js';

let folder: string;
beforeAll(buildTool);
beforeEach(() => {
  folder = temporaryFolder();
});
afterEach(() => {
  remove(folder);
});

const text = (path: string) => readFileSync(join(folder, path), 'utf8');
const pause = (milliseconds: number) => new Promise((resolve) => setTimeout(resolve, milliseconds));

/** Ctrl-C after so long. */
async function interrupted(args: readonly string[], after: number) {
  const { child, ended } = start(folder, args);
  await pause(after);
  child.kill('SIGINT');
  return ended;
}

/** The first of ever longer runs in which there was something to save; in all others nothing is written. */
async function saved(args: readonly string[], file: string) {
  for (let after = 1000; after < 60_000; after *= 2) {
    const ended = await interrupted(args, after);
    expect(ended).toMatchObject({ code: 130, signal: null });
    if (existsSync(join(folder, file))) return ended;
    expect(ended.err).toBe('steelyard: interrupted before there was anything to save: nothing written\n');
    expect(filesBelow(folder)).toEqual([]);
  }
  throw new Error('no placement in a minute');
}

describe('Ctrl-C', () => {
  it(
    'in a run of 14 bits gives 130 and a placement that the check accepts, three times',
    { timeout: 900_000 },
    async () => {
      for (const workers of [1, 2, 3]) {
        const args = ['place', '--bits', '14', '--workers', String(workers), '--out', 'o'];
        const { out, err } = await saved(args, 'o/cdac14.floorplan.json');
        expect(out).toMatch(/^cdac14, 14 bits.*\n[^]*^placement +interrupted/m);
        expect(err).toMatch(
          /^steelyard: interrupted; the best placement so far is saved, without wires; to draw it: steelyard export o.cdac14\.floorplan\.json --to /,
        );
        expect(filesBelow(folder)).toEqual(['o/cdac14.floorplan.json', 'o/cdac14.metrics.json']);
        expect(JSON.parse(text('o/cdac14.metrics.json')).status).toBe('interrupted');
        expect(JSON.parse(text('o/cdac14.floorplan.json')).placement.status).toBe('interrupted');
        if (workers === 3) {
          const checked = await finished(folder, ['check', 'o/cdac14.floorplan.json']);
          expect(checked).toMatchObject({ code: 0, out: expect.stringMatching(/^no findings\n/) });
        }
        remove(join(folder, 'o'));
      }
    },
  );

  it('takes away the drawing of an earlier floorplan, and names it', { timeout: 300_000 }, async () => {
    const weights = Array.from({ length: 11 }, (_, bit) => 2 ** bit);
    const array = { format: 'steelyard/array', version: 1, name: 'old', weights, effort: 'thorough' };
    writeFileSync(join(folder, 'a.json'), JSON.stringify(array));
    const few = ['place', '--bits', '2', '--effort', 'quick', '--out', 'o'];
    await finished(folder, few);
    for (const name of filesBelow(folder).filter((path) => path.startsWith('o/')))
      writeFileSync(join(folder, name.replace('cdac2', 'old')), 'of an earlier run');
    writeFileSync(join(folder, 'o', 'old.note'), 'of somebody else');
    let err = '';
    for (let after = 2000; !err.includes('is saved') && after < 60_000; after *= 2)
      ({ err } = await interrupted(['place', 'a.json', '--out', 'o'], after));
    const ours = filesBelow(join(folder, 'o')).filter((name) => name.startsWith('old'));
    expect(ours).toEqual(['old.floorplan.json', 'old.metrics.json', 'old.note']);
    expect(err).toContain('steelyard: o/old.gds removed: it belonged to the floorplan that was there before\n');
    expect(filesBelow(join(folder, 'o')).filter((name) => name.startsWith('cdac2'))).toHaveLength(12);
  });

  it('ends the drawing and checking of what is there too', { timeout: 180_000 }, async () => {
    await finished(folder, ['pattern', 'chessboard', '--bits', '12', '--out', 'f.json']);
    for (const args of [
      ['check', 'f.json'],
      ['export', 'f.json', '--to', 'gds', '--out', 'o'],
      ['place', 'f.json'],
    ]) {
      const { code, err } = await interrupted(args, 1500);
      expect({ code, err }).toEqual({
        code: 130,
        err: 'steelyard: interrupted before there was anything to save: nothing written\n',
      });
      expect(filesBelow(folder)).toEqual(['f.json']);
    }
  });
});

describe('a run that is killed', () => {
  it('leaves each file of the earlier result or of its own, whole', { timeout: 300_000 }, async () => {
    const args = (seed: number, out: string) =>
      ['place', '--bits', '4', '--effort', 'quick', '--seed', String(seed), '--out', out]; // prettier-ignore
    await finished(folder, args(1, 'one'));
    const begun = Date.now();
    await finished(folder, args(2, 'two'));
    const whole = Date.now() - begun;
    await finished(folder, args(1, 'o'));
    const names = filesBelow(join(folder, 'one'));
    const dice = new Dice(4, 0);
    for (let kill = 0; kill < 10; kill++) {
      const { child, ended } = start(folder, args(2 - (kill % 2), 'o'));
      await Promise.race([pause(whole * (kill % 2 === 0 ? dice.next() : 0.8 + 0.3 * dice.next())), ended]);
      child.kill('SIGKILL');
      await ended;
      for (const name of names) expect([text(`one/${name}`), text(`two/${name}`)]).toContain(text(`o/${name}`));
    }
    // The next run that comes to its end takes away what the killed ones have left.
    await finished(folder, args(2, 'o'));
    expect(filesBelow(join(folder, 'o'))).toEqual(names);
    for (const name of names) expect(text(`o/${name}`)).toBe(text(`two/${name}`));
  });
});
