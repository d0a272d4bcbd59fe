import { spawnSync } from 'node:child_process';
import { closeSync, openSync, readFileSync, writeFileSync, writeSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { kiln4 } from '../spec/kiln4.js';
import { buildTool, filesBelow, finished, remove, temporaryFolder, tool } from './built-tool.js';

let folder: string;
beforeAll(buildTool);
beforeEach(() => {
  folder = temporaryFolder();
});
afterEach(() => {
  remove(folder);
});

const write = (name: string, content: string | Uint8Array) => {
  writeFileSync(join(folder, name), content);
};

/** A file of so many bytes: a head, then one piece again and again, then an end. */
function large(name: string, bytes: number, head: string, piece: string, end: string): void {
  const file = openSync(join(folder, name), 'w');
  const block = piece.repeat(Math.ceil(2 ** 20 / piece.length));
  writeSync(file, head);
  for (let written = 0; written < bytes; written += block.length) writeSync(file, block);
  writeSync(file, end);
  closeSync(file);
}

const utf16 = (text: string) => Buffer.from(`\ufeff${text}`, 'utf16le');
const array = '{"format": "steelyard/array", "version": 1, "bits": 2, "effort": "quick"}';

describe('a file that is no array', () => {
  it.each<[string, string | Uint8Array, RegExp]>([
    ['nothing', '', /^x:1:1: found an empty file; wanted a JSON object\n$/],
    [
      '65 levels',
      '['.repeat(65) + ']'.repeat(65),
      /^x:1:65: found more than 64 levels of nesting; wanted 64 levels at most\n$/,
    ],
    ['a million levels', '['.repeat(1e6), /^x:1:65: found more than 64 levels of nesting/],
    ['UTF-16', utf16(array), /^x: found text in UTF-16; wanted JSON text in UTF-8\n$/],
    ['UTF-16, the other way round', utf16(array).swap16(), /^x: found text in UTF-16; wanted JSON text in UTF-8\n$/],
    ['UTF-16 without a mark', utf16(array).subarray(2), /^x:1:2: found "\\u0000"; wanted a key/],
    [
      'no UTF-8',
      Buffer.concat([Buffer.from(`${array}\n`), Buffer.from([0xc3, 0x28])]),
      /^x:2: found bytes that are no UTF-8/,
    ],
    [
      'terminal commands',
      '{"\\u001b[2J\\u202e": 1, "format": "steelyard/array", "version": 1, "bits": 2}',
      /unknown key "\\u001b\[2J\\u202e"/,
    ],
  ])('%s ends with 2 and says so', async (_, content, said) => {
    write('x', content);
    const { code, out, err } = await finished(folder, ['place', 'x']);
    expect({ code, out }).toEqual({ code: 2, out: '' });
    expect(err).toMatch(said);
    expect(filesBelow(folder)).toEqual(['x']);
  });

  it('a byte order mark before it is no matter', async () => {
    write('x', `\ufeff${array}`);
    expect(await finished(folder, ['place', 'x', '--floorplan-only'])).toMatchObject({ code: 0, err: '' });
  });

  it.each<[string, string, string, string, RegExp]>([
    ['blanks', '', ' ', '', /^x:1:1: found an empty file/],
    ['a text', '"', 'aaaaaaaa', '"', /^x:1:1: found "a+\.\.\."; wanted an object/],
    ['lines that do not parse', '', '\n"', '', /^x:2:1: found "\\""; wanted a text with its closing quote/],
    ['lists', '[', '[],', '0]', /^x:1:1: found more than 12000000 lists, objects and keys; wanted 12000000 at most\n$/],
    [
      'numbers where capacitors belong',
      '{"format": "steelyard/floorplan", "version": 1, "core": {"rows": 1, "columns": 1, "pitch_um": [1, 1]}, "cells": [["B0"]], "capacitors": [',
      '7, ',
      '7]}',
      /^x:1:\d+ \/capacitors: found a list of \d+; wanted a list of 1 to \d+\n/m,
    ],
  ])('100 MB of %s end with 2', { timeout: 300_000 }, async (_, head, piece, end, said) => {
    large('x', 1e8, head, piece, end);
    const { code, out, err } = await finished(folder, ['place', 'x']);
    expect({ code, out }).toEqual({ code: 2, out: '' });
    expect(err).toMatch(said);
  });

  it('what takes more memory than there is ends with 3 and says what would do', { timeout: 300_000 }, async () => {
    const little = { NODE_OPTIONS: '--max-old-space-size=50' };
    const { code, out, err } = await finished(folder, ['place', '--bits', '12', '--effort', 'quick'], little);
    expect({ code, out }).toEqual({ code: 3, out: '' });
    expect(err).toMatch(
      /^steelyard: impossible as asked: the memory .* does not suffice\n {2}Give it more, as in: NODE_OPTIONS=/,
    );
    expect(filesBelow(folder)).toEqual([]);
  });
});

describe('a million points', () => {
  const drawing = (polygons: readonly (readonly (readonly number[])[])[]) => {
    const { technology, topStructure, ...rest } = JSON.parse(kiln4('kiln4.polygons.json'));
    const { stream } = technology.layers.find(({ name }: { name: string }) => name === technology.roles.trunk);
    const structure = {
      name: topStructure,
      polygons: polygons.map((xy) => ({ ...stream, xy })),
      references: [],
      labels: [],
    };
    return JSON.stringify({ ...rest, technology, topStructure, structures: [structure] });
  };

  it('in one comb, or in squares of their own, are checked', { timeout: 600_000 }, async () => {
    const teeth = 250_000;
    const back: number[][] = [[0, 0], [120 * teeth, 0], [120 * teeth, 100]]; // prettier-ignore
    const comb = Array.from({ length: teeth }, (_, i) => 120 * (teeth - 1 - i)).flatMap(
      (x) =>
      [[x + 90, 100], [x + 90, 1000], [x + 30, 1000], [x + 30, 100]], // prettier-ignore
    );
    write('comb.json', drawing([[...back, ...comb, [0, 100]]]));
    const squares = Array.from({ length: teeth }, (_, i) => {
      const [x, y] = [2000 * (i % 500), 2000 * Math.floor(i / 500)];
      return [[x, y], [x + 1000, y], [x + 1000, y + 1000], [x, y + 1000]]; // prettier-ignore
    });
    write('squares.json', drawing(squares));
    for (const [file, least] of [
      ['comb.json', 2 * teeth],
      ['squares.json', teeth],
    ] as const) {
      const { code, out, err } = await finished(folder, ['check', file]);
      expect({ code, err }).toEqual({ code: 1, err: '' });
      expect(out.split('\n').length).toBeGreaterThan(least);
    }
  });
});

describe('a disk that takes no more', () => {
  it('ends with 4; the earlier set is as it was', { timeout: 120_000 }, async () => {
    const args = ['place', '--bits', '4', '--effort', 'quick', '--out', 'o'];
    await finished(folder, [...args, '--seed', '2']);
    const kept = filesBelow(folder);
    const before = kept.map((path) => readFileSync(join(folder, path), 'latin1'));
    // No file may grow beyond 40 blocks: what a full disk is to the one file that is too large.
    const limited = ['-c', 'trap "" XFSZ; ulimit -f 40; exec "$0" "$@"', process.execPath, tool, ...args];
    const { status, stdout, stderr } = spawnSync('sh', limited, { cwd: folder, encoding: 'utf8' });
    expect({ status, stdout }).toEqual({ status: 4, stdout: '' });
    expect(stderr).toBe(
      'steelyard: o/cdac4.polygons.json could not be written: it is larger than a file may be here (EFBIG)\n',
    );
    expect(filesBelow(folder)).toEqual(kept);
    expect(kept.map((path) => readFileSync(join(folder, path), 'latin1'))).toEqual(before);
  });
});
