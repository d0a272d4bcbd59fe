import { describe, expect, it } from 'vitest';
import { problemLine, shown } from '../../src/cli/fault.js';
import { formatOf } from '../../src/cli/input.js';
import { MachineInMemory } from './machine-in-memory.js';

const head = '"format": "steelyard/array", "version": 1';
const utf16 = (text: string) =>
  new Uint8Array(Buffer.concat([Buffer.from([0xff, 0xfe]), Buffer.from(text, 'utf16le')]));

describe('a broken file ends with its code, is named with the place of each problem, and nothing is written', () => {
  const cases: [name: string, content: string | Uint8Array, said: RegExp[]][] = [
    ['an empty file', '', [/^a\.json:1:1: found an empty file; wanted a JSON object$/m]],
    ['no JSON', '{"bits": 4,}', [/^a\.json:1:12: found "}"; wanted a key/m]],
    ['cut short', `{${head}, "bits": 10`, [/^a\.json:1:\d+: found the end of the file; wanted a closing brace$/m]],
    ['an unknown key', `{${head},\n  "bitz": 4}`, [/^a\.json:2:3 \/bitz: found .*; wanted "bits"/m]],
    [
      'a wrong value',
      `{${head},\n "bits": 40}`,
      [/^a\.json:2:10 \/bits: found 40; wanted a whole number from 2 to 14$/m],
    ],
    [
      'several problems',
      `{${head},\n "bits": 40,\n "seed": "x",\n "rings": 7}`,
      [/^a\.json:2:10 \/bits/m, /^a\.json:3:10 \/seed/m, /^a\.json:4:11 \/rings/m],
    ],
    ['bits and weights', `{${head}, "bits": 4, "weights": [1, 2]}`, [/\/weights: found "weights" beside "bits"/]],
    ['a repeated key', `{${head}, "bits": 4, "bits": 5}`, [/\/bits: found key "bits" once more/]],
    ['a key of a later version', `{${head}, "bits": 4, "block": {"maxWidth_um": 90}}`, [/"block" is not available/]],
    [
      'a pitch with wires',
      `{${head}, "bits": 4, "core": {"rows": 5, "columns": 3, "pitch_um": [9, 9]}}`,
      [/^a\.json.* \/core\/pitch_um: found/m],
    ],
    [
      'a template that is none',
      `{${head}, "bits": 4, "technology": "gold"}`,
      [/^a\.json \/technology: found "gold"; wanted a shipped/m],
    ],
    ['nested without end', '['.repeat(100_000), [/levels of nesting/]],
    ['UTF-16', utf16(`{${head}, "bits": 4}`), [/^a\.json: found text in UTF-16; wanted JSON text in UTF-8$/m]],
    [
      'no text at all',
      new Uint8Array([0x7b, 0x0a, 0xc3, 0x28]),
      [/^a\.json:2: found bytes that are no UTF-8; wanted/m],
    ],
    [
      'a floorplan off every grid',
      '{"format": "steelyard/floorplan", "version": 1, "core": {"rows": 1, "columns": 1, "pitch_um": [7.20005, 1]}, "capacitors": [{"name": "B0", "role": "bit", "weight": 1, "units": 1}], "cells": [["B0"]]}',
      [/\/core\/pitch_um\/0: found 7.20005 um; wanted a whole/],
    ],
    ['another format', '{"format": "steelyard/polygons", "version": 1}', [/this is a file of another kind/]],
  ];
  it.each(cases)('%s', async (_, content, said) => {
    const machine = new MachineInMemory().put('a.json', content);
    expect(await machine.run('place a.json')).toBe(2);
    for (const words of said) expect(machine.err).toMatch(words);
    expect(machine.out).toBe('');
    expect(machine.written).toEqual([]);
  });

  it('takes a byte order mark of UTF-8', async () => {
    const machine = new MachineInMemory().put('a.json', `\ufeff{${head}, "bits": 2}`);
    expect(await machine.run('place a.json --floorplan-only')).toBe(0);
  });

  it('refuses a file past the limit without reading on', async () => {
    const machine = new MachineInMemory().put('big.json', new Uint8Array(128 * 2 ** 20 + 2));
    expect(await machine.run('place big.json')).toBe(2);
    expect(machine.err).toBe('big.json: found more than 128 MiB; wanted a file of 128 MiB at most\n');
  });

  it('impossible as asked: 3, which rule, and what would help', async () => {
    const machine = new MachineInMemory().put('a.json', `{${head}, "bits": 4, "rings": 0, "termination": "ring"}`);
    expect(await machine.run('place a.json')).toBe(3);
    expect(machine.err).toMatch(/^steelyard: impossible as asked: .*ring.*\n {2}Ask for/);
    expect(machine.written).toEqual([]);
    const small = new MachineInMemory();
    expect(await small.run('place --bits 4 --core 2x2')).toBe(3);
    expect(small.err).toContain('4 cells');
    expect(small.written).toEqual([]);
  });

  it.each([
    ['ENOENT', 'no such file or folder'],
    ['EACCES', 'permission denied'],
    ['EISDIR', 'it is a folder'],
  ])('a file that cannot be read (%s): 4, which and why', async (code, why) => {
    const machine = new MachineInMemory();
    machine.broken.set('a.json', code);
    for (const line of ['place a.json', 'check a.json', 'export a.json --to gds']) {
      machine.err = '';
      expect(await machine.run(line)).toBe(4);
      expect(machine.err).toBe(`steelyard: a.json could not be read: ${why} (${code})\n`);
    }
    expect(machine.written).toEqual([]);
  });

  it('a technology file beside the array file that is not there: 4', async () => {
    const machine = new MachineInMemory().put('in/a.json', `{${head}, "bits": 4, "technology": "t.json"}`);
    expect(await machine.run('place in/a.json')).toBe(4);
    expect(machine.err).toBe('steelyard: in/t.json could not be read: no such file or folder (ENOENT)\n');
  });
});

describe('text of a stranger', () => {
  it('cannot write on the terminal', async () => {
    expect(shown('a\u001b[2J\u202e\n\u2028b')).toBe('a\\u{1b}[2J\\u{202e}\\u{a}\\u{2028}b');
    const name = 'x\u001b]0;owned\u0007.json';
    const machine = new MachineInMemory().put(
      name,
      `{${head}, "bits": 4, "\\u001b[31mred": 1, "technology": "\\u001b[2J"}`,
    );
    expect(await machine.run(`place ${name}`)).toBe(2);

    expect(machine.err).not.toMatch(/[\u0000-\u0009\u000b-\u001f\u007f-\u009f]/);
    expect(machine.err).toContain('x\\u{1b}]0;owned\\u{7}.json:1:');
  });

  it('is placed as far as the place is known', () => {
    const said = { found: 'a', wanted: 'b' };
    expect(problemLine({ ...said, file: 'f', line: 1, column: 2, pointer: '/p' })).toBe('f:1:2 /p: found a; wanted b');
    expect(problemLine({ ...said, file: 'f', line: 1, column: 2, pointer: '' })).toBe('f:1:2: found a; wanted b');
    expect(problemLine({ ...said, pointer: '--bits' })).toBe('--bits: found a; wanted b');
    expect(problemLine({ ...said, pointer: '' })).toBe('input: found a; wanted b');
  });
});

describe('the kind of a file', () => {
  it.each([
    ['{"format": "steelyard/array"}', 'array'],
    ['{"technology": {"format": "steelyard/technology"}, "format": "steelyard/floorplan"}', 'floorplan'],
    ['{"format": "steelyard/polygons",', 'polygons'],
    ['{"format": 3}', undefined],
    ['{"format": "other/array"}', undefined],
    ['[]', undefined],
    ['null', undefined],
    ['', undefined],
  ])('%s', (text, kind) => {
    expect(formatOf(text)).toBe(kind);
  });
});

describe('a defect of the program', () => {
  const broken = () => {
    const machine = new MachineInMemory();
    machine.breath = () => Promise.reject(new TypeError('nothing there'));
    return machine;
  };
  it('is 5 and says so, without a stack', async () => {
    const machine = broken();
    expect(await machine.run('place --bits 4')).toBe(5);
    expect(machine.err).toMatch(/^steelyard: a defect of this program, not of your input: TypeError: nothing there\n/);
    expect(machine.err).not.toContain(' at ');
    expect(machine.written).toEqual([]);
  });
  it('with --debug also shows the stack', async () => {
    const machine = broken();
    expect(await machine.run('place --bits 4 --debug')).toBe(5);
    expect(machine.err).toMatch(/\n +at /);
  });
});
