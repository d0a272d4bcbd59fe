import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { writeDeviceNetlist } from '../../src/export/spice-devices.js';
import { writeCapacitorNetlist } from '../../src/export/spice.js';
import type { PinMap } from '../../src/spec/pin-map.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { drawn } from '../pipeline/drawn.js';

// Debian's ngspice reads the netlists and solves them: voltages on the common plate, code by code, by nodal analysis. What they should be
// comes from the charges on a capacitive divider: V = sum of the driven capacitances over all of them (end-point line, in LSB).

let directory = '';
beforeAll(() => (directory = mkdtempSync(join(tmpdir(), 'circuit-'))));
afterAll(() => rmSync(directory, { recursive: true }));

const BITS = 6;
const CODES = 1 << BITS;
const bitNames = Array.from({ length: BITS }, (_, bit) => `B${bit}`);

/** The voltage of the common plate at every code, one volt on the bits that are on; all other pins but it are grounded. */
function solve(netlist: string, { top = 'TOP', bits = bitNames, models = '' } = {}): number[] {
  const pins = /^\.SUBCKT \S+ (.*(\n\+ .*)*)/m.exec(netlist)![1].replaceAll('\n+', '').split(/\s+/);
  expect(pins).toEqual(expect.arrayContaining([top, ...bits]));
  const name = /^\.SUBCKT (\S+)/m.exec(netlist)![1];
  const commands: string[] = [];
  for (let code = 0; code < CODES; code++) {
    for (let bit = 0; bit < BITS; bit++)
      if (code === 0 || (((code - 1) ^ code) >> bit) & 1)
        commands.push(`alter vbit${bit} acmag = ${(code >> bit) & 1}`);
    commands.push('ac lin 1 1g 1g', `print vr(${top})`);
  }
  writeFileSync(join(directory, 'array.cir'), netlist);
  writeFileSync(
    join(directory, 'codes.cir'),
    [
      'codes one after another',
      models,
      '.include array.cir',
      `Xarray ${pins.join(' ')} ${name}`,
      ...bits.map((pin, bit) => `Vbit${bit} ${pin} 0 dc 0 ac 0`),
      ...pins.filter((pin) => pin !== top && !bits.includes(pin)).map((pin, i) => `Vquiet${i} ${pin} 0 dc 0 ac 0`),
      `Rtop ${top} 0 1e15`,
      '.control',
      'set numdgt=15',
      ...commands,
      'quit 0',
      '.endc',
      '.end',
      '',
    ].join('\n'),
  );
  const output = execFileSync('ngspice', ['-b', 'codes.cir'], { cwd: directory, encoding: 'utf8', stdio: 'pipe' });
  const voltages = [...output.matchAll(/^vr\(.*\) = (\S+)$/gm)].map(([, value]) => Number(value));
  expect(voltages).toHaveLength(CODES);
  return voltages;
}

/** INL and DNL in LSB of a list of outputs over all codes. */
function linearity(outputs: readonly number[]): { inl: number[]; dnl: number[] } {
  const [first, last] = [outputs[0], outputs[CODES - 1]];
  const inl = outputs.map((v, code) => ((v - first) / (last - first)) * (CODES - 1) - code);
  return { inl, dnl: inl.slice(1).map((value, code) => value - inl[code]) };
}

/** The same in closed form, from the capacitance of each bit. */
function closedForm(capacitance: readonly number[]) {
  const all = capacitance.reduce((sum, c) => sum + c, 0);
  const on = (code: number) => capacitance.reduce((sum, c, bit) => sum + ((code >> bit) % 2) * c, 0);
  const inl = Array.from({ length: CODES }, (_, code) => (on(code) * (CODES - 1)) / all - code);
  return { inl, dnl: inl.slice(1).map((value, code) => value - inl[code]) };
}

function expectAlike(outputs: readonly number[], capacitance: readonly number[]) {
  const [found, wanted] = [linearity(outputs), closedForm(capacitance)];
  for (const key of ['inl', 'dnl'] as const)
    for (const [i, value] of wanted[key].entries()) expect(Math.abs(found[key][i] - value)).toBeLessThan(1e-9);
  return wanted;
}

/** Six bits, a termination in the ring, fill dummies on the common plate. */
const array = drawn({ bits: BITS, core: { rows: 7, columns: 10 }, effort: 'quick' }).polygons!;
const unit = array.technology.unit.capacitance_fF;

interface Unit {
  readonly name: string;
  /** Relative to the nominal unit: a slope across the array, and a random part. */
  readonly size: number;
}

/** Every unit in the order of the list of cells, with a capacitance of its own. */
function unitsOf({ structures }: Polygons): Unit[] {
  const random = new Random(20);
  return structures.flatMap((s) =>
    s.references.flatMap((r) =>
      (r.cells ?? []).map((name, i) => {
        const [column, row] = [i % r.columns, Math.floor(i / r.columns)];
        return { name, size: 1 + 0.004 * column - 0.002 * row + 0.02 * (random.below(1 << 20) / (1 << 20) - 0.5) };
      }),
    ),
  );
}

const units = unitsOf(array);
const sizeOf = (name: string) => units.reduce((sum, u) => (u.name === name ? sum + u.size : sum), 0);
const bitSizes = bitNames.map(sizeOf);
const count = (...names: string[]) => units.filter(({ name }) => names.includes(name)).length;

describe('one capacitor a bit', () => {
  it('gives the nonlinearity of its capacitances at every code', () => {
    const capacitances_fF = Object.fromEntries([...bitNames, 'TERM'].map((name) => [name, unit * sizeOf(name)]));
    const outputs = solve(writeCapacitorNetlist(array, { capacitances_fF }));
    const { inl } = expectAlike(outputs, bitSizes);
    expect(Math.max(...inl.map(Math.abs))).toBeGreaterThan(0.01);
    // The full scale: bits against bits, termination and fill.
    const bits = bitSizes.reduce((sum, size) => sum + size, 0);
    expect(outputs[CODES - 1]).toBeCloseTo(bits / (bits + sizeOf('TERM') + count('=')), 9);
    expect(count('=')).toBe(7);
  });

  it('is linear as drawn, and without dummies has no load from fill', () => {
    const outputs = solve(writeCapacitorNetlist(array, { dummies: 'omit' }));
    expectAlike(outputs, [1, 2, 4, 8, 16, 32]);
    expect(outputs[CODES - 1]).toBeCloseTo(63 / 64, 12);
  });

  it("is solved under names of the user's own", () => {
    const bits = bitNames.map((_, bit) => `sar_d<${bit}>`);
    const pins: PinMap = {
      format: 'steelyard/pins',
      version: 1,
      pins: [...bits.map((name, bit) => ({ pin: `B${bit}`, name })), { pin: 'TOP', name: 'vdac' }],
    };
    const outputs = solve(writeCapacitorNetlist(array, { pins }), { top: 'vdac', bits });
    expect(outputs).toEqual(solve(writeCapacitorNetlist(array)));
  });
});

describe('one device a unit', () => {
  // Area and edge of a plate of 4.4 um by 4.4 um as the template has them: 19.36 fF and 0.704 fF.
  const model = '.model cpp c (cj=1e-3 cjsw=4e-11)';
  const fullScale = 63 / (64 + count('='));

  it.each(['units', 'merged'] as const)('%s: is solved to the same voltages as capacitors', (devices) => {
    const outputs = solve(writeDeviceNetlist(array, { devices }), { models: model });
    solve(writeCapacitorNetlist(array)).forEach((v, code) => expect(outputs[code]).toBeCloseTo(v, 12));
    expect(outputs[CODES - 1]).toBeCloseTo(fullScale, 12);
  });

  it('has each unit on its net: a mismatch of its own in every device', () => {
    let i = 0;
    const netlist = writeDeviceNetlist(array).replaceAll(/ w=4\.4u/g, () => ` w=${4.4 * units[i++].size}u`);
    expect(i).toBe(units.length);
    const { inl } = expectAlike(solve(netlist, { models: '.model cpp c (cj=1e-3)' }), bitSizes);
    expect(Math.max(...inl.map(Math.abs))).toBeGreaterThan(0.01);
  });

  it('may be a subcircuit of the process', () => {
    const device = {
      model: 'plate_pair',
      prefix: 'X',
      terminals: ['bottom', 'top', 'bulk'],
      bulk: 'VSS',
      parameters: { w: '4.4u', l: '4.4u' },
    } as const;
    const other = { ...array, technology: { ...array.technology, device } };
    const models =
      '.subckt plate_pair minus plus sub w=1u l=1u\nCarea plus minus {1e-3*w*l+8e-11*(w+l)}\nCsub minus sub 1f\n.ends';
    solve(writeDeviceNetlist(other), { models }).forEach((v, code) =>
      expect(v).toBeCloseTo((code / 63) * fullScale, 9),
    );
  });
});
